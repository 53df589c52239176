// The N-fold test on a whole stack at once: energies summed over its images.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "common/session.hpp"
#include "tambour/stack_study.hpp"

namespace tambour::tools::symmetry {

/// Sums whitened energies. Images need not share their angle, but must show one kind of object.
class StackSum {
 public:
  explicit StackSum(const StackStudyPlan& plan) : plan_(plan) {}

  void add(const ImageStudy& study, std::span<const std::complex<double>> coefficients);
  std::size_t images() const noexcept { return images_; }
  /// Nothing when no image was added.
  std::optional<SymmetryEvidence> evaluate(Executor& executor) const;

 private:
  const StackStudyPlan& plan_;
  std::vector<double> sum_;
  std::size_t images_ = 0;
};

/// "stack.csv" in the folder of the table of images. Throws Error(invalid_argument) when that is the table itself.
std::string stack_table_beside(const std::string& table);

void write_stack_table(const std::string& path, const std::optional<SymmetryEvidence>& evidence, std::size_t images,
                       const Session& session, bool overwrite);

}  // namespace tambour::tools::symmetry
