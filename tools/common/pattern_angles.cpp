#include "common/pattern_angles.hpp"

#include <algorithm>

namespace tambour::tools {

void PatternAngles::add(const ImageStudy& study, const std::complex<double>* coefficients) {
  if (!study.evidence || study.evidence->verdict != Verdict::best_supported) return;
  const int fold = study.evidence->fold;
  const std::size_t first = basis_.order_begin(fold);
  const std::size_t last = basis_.order_begin(fold + 1);
  of_fold_[fold].push_back({study.image, {coefficients + first, coefficients + last}, study.noise});
}

std::vector<std::complex<double>> PatternAngles::spread_out(const Kept& kept, int fold) const {
  std::vector<std::complex<double>> all(basis_.size());
  std::copy(kept.order.begin(), kept.order.end(), all.begin() + static_cast<std::ptrdiff_t>(basis_.order_begin(fold)));
  return all;
}

std::map<std::size_t, PatternAngle> PatternAngles::angles() const {
  std::map<std::size_t, PatternAngle> result;
  for (const auto& [fold, images] : of_fold_) {
    AngleReference reference(basis_, fold);
    for (const auto& kept : images) reference.add(spread_out(kept, fold), kept.noise);
    const auto weights = reference.weights();
    for (const auto& kept : images)
      result[kept.image] = pattern_angle(basis_, fold, spread_out(kept, fold), weights, kept.noise);
  }
  return result;
}

}  // namespace tambour::tools
