#include "tambour/symmetry.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/check.hpp"
#include "study/evidence.hpp"
#include "study/null_law.hpp"

namespace tambour {

const char* to_string(Verdict verdict) {
  switch (verdict) {
    case Verdict::best_supported:
      return "best_supported";
    case Verdict::inconclusive:
      return "inconclusive";
    case Verdict::skipped:
      return "skipped";
  }
  throw Error(ErrorCode::internal, "unknown verdict");
}

std::vector<std::string> SymmetryOptions::problems() const {
  std::vector<std::string> found;
  if (first_fold < 2 || last_fold > 120 || first_fold > last_fold)
    found.push_back(
        fmt::format("folds are {}:{}; allowed is LOW:HIGH with 2 <= LOW <= HIGH <= 120", first_fold, last_fold));
  if (!(alpha >= 1e-4 && alpha <= 0.1)) found.push_back(fmt::format("alpha is {}; allowed is 1e-4 to 0.1", alpha));
  if (images < 1 || images > 1000000) found.push_back(fmt::format("images is {}; allowed is 1 to 1000000", images));
  if (draws < 2000 || draws > 1000000) found.push_back(fmt::format("draws is {}; allowed is 2000 to 1000000", draws));
  return found;
}

struct SymmetryTest::Data {
  DiskBasis basis;
  SymmetryOptions options;
  Shells shells;
  study::Evidence evidence;
  study::NullLaw null_law;

  Data(const DiskBasis& b, const SymmetryOptions& o, Executor& executor)
      : basis(b),
        options(o),
        shells(make_shells(b)),
        evidence(shells, b.root_limit(), o.first_fold, o.last_fold, o.images),
        null_law(evidence, shells, o.images, o.draws, o.seed, executor) {}
};

SymmetryTest::SymmetryTest(const DiskBasis& basis, const SymmetryOptions& options, Executor& executor) {
  refuse_if_any(options.problems());
  require(options.last_fold <= basis.max_order(), "highest fold", options.last_fold,
          fmt::format("up to {}, the highest angular order under the band limit", basis.max_order()));
  data_ = std::make_unique<const Data>(basis, options, executor);
}

SymmetryTest::~SymmetryTest() = default;

const SymmetryOptions& SymmetryTest::options() const noexcept { return data_->options; }
const Shells& SymmetryTest::shells() const noexcept { return data_->shells; }

std::vector<double> SymmetryTest::whitened(std::span<const double> raw_energies, const NoiseSpectrum& noise) const {
  const Data& d = *data_;
  require(raw_energies.size() == d.basis.size(), "number of energies", raw_energies.size(),
          fmt::format("{}, one per term", d.basis.size()));
  const int orders = d.evidence.orders();
  std::vector<double> energies(d.shells.size() * orders, 0.0);
  for (std::size_t i = 0; i < raw_energies.size(); ++i) {
    if (d.shells.of_term[i] < 0) continue;
    const Term& term = d.basis.terms()[i];
    energies[static_cast<std::size_t>(d.shells.of_term[i]) * orders + term.angular_order] +=
        raw_energies[i] / noise.at(term.root);
  }
  return energies;
}

SymmetryEvidence SymmetryTest::evaluate(std::span<const double> energies) const {
  const Data& d = *data_;
  const int orders = d.evidence.orders();
  require(energies.size() == d.shells.size() * orders, "number of whitened energies", energies.size(),
          fmt::format("{}, shells times orders", d.shells.size() * orders));
  SymmetryEvidence result;
  result.ln_bf_of_fold.resize(d.evidence.folds());
  d.evidence.ln_bayes_factors(energies, result.ln_bf_of_fold);
  const auto best = std::max_element(result.ln_bf_of_fold.begin(), result.ln_bf_of_fold.end());
  result.fold = d.options.first_fold + static_cast<int>(best - result.ln_bf_of_fold.begin());
  result.ln_bf = *best;
  const double statistic = study::Evidence::statistic(result.ln_bf_of_fold);
  result.p_noise = d.null_law.p_value(statistic);
  // Prior: 1/2 on none, 1/2 shared equally, so the folds together have the odds exp(statistic).
  const double any = 1 / (1 + std::exp(-statistic));
  result.posterior = any * std::exp(*best - statistic) / d.evidence.folds();
  for (int n = result.fold; n < orders; n += result.fold)
    for (std::size_t j = 0; j < d.shells.size(); ++j)
      result.visibility += energies[j * orders + n] - d.shells.degrees_of_freedom[j][n] * d.options.images;
  result.verdict = result.p_noise < d.options.alpha ? Verdict::best_supported : Verdict::inconclusive;
  return result;
}

}  // namespace tambour
