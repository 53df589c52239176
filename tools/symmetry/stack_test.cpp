#include "symmetry/stack_test.hpp"

#include <fmt/format.h>

#include <filesystem>

#include "tambour/error.hpp"
#include "tambour/spectrum.hpp"

namespace tambour::tools::symmetry {

void StackSum::add(const ImageStudy& study, std::span<const std::complex<double>> coefficients) {
  const auto energies = plan_.symmetry_test()->whitened(raw_energies(plan_.basis(), coefficients), study.noise);
  if (sum_.empty()) sum_.assign(energies.size(), 0.0);
  for (std::size_t i = 0; i < energies.size(); ++i) sum_[i] += energies[i];
  ++images_;
}

std::optional<SymmetryEvidence> StackSum::evaluate(Executor& executor) const {
  if (images_ == 0) return std::nullopt;
  SymmetryOptions options = plan_.options().symmetry;
  options.images = static_cast<int>(images_);
  return SymmetryTest(plan_.basis(), options, executor).evaluate(sum_);
}

std::string stack_table_beside(const std::string& table) {
  const std::filesystem::path path(table);
  if (path.filename() == "stack.csv")
    throw Error(ErrorCode::invalid_argument,
                "--out is 'stack.csv', the name of the table that --stack adds; choose another");
  return (path.parent_path() / "stack.csv").string();
}

void write_stack_table(const std::string& path, const std::optional<SymmetryEvidence>& evidence, std::size_t images,
                       const Session& session, bool overwrite) {
  CsvWriter table(path, overwrite);
  session.describe_in(table);
  table.row({"fold", "ln_bf", "p_noise", "p_structure", "q_value", "verdict", "images"});
  if (evidence)
    table.row({std::to_string(evidence->fold), cell(evidence->ln_bf), cell(evidence->p_noise), "", "",
               to_string(evidence->verdict), std::to_string(images)});
  else
    table.row({"", "", "", "", "", to_string(Verdict::skipped), "0"});
  table.commit();
}

}  // namespace tambour::tools::symmetry
