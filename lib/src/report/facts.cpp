#include "report/facts.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <map>
#include <tuple>

namespace tambour::report {
namespace {

// The largest of 1, 2, 5 times a power of ten that is not above `value`.
double round_down(double value) {
  const double power = std::pow(10, std::floor(std::log10(value)));
  for (const double step : {5.0, 2.0})
    if (value >= step * power) return step * power;
  return power;
}

}  // namespace

int verdict_rank(const std::string& verdict) {
  constexpr const char* order[] = {"symmetric", "best_supported", "inconclusive", "skipped"};
  return static_cast<int>(std::find(std::begin(order), std::end(order), verdict) - std::begin(order));
}

Facts gather(const ReportData& data) {
  Facts facts;
  facts.skipped = data.images > data.analysed ? data.images - data.analysed : 0;
  facts.verdicts = data.verdicts;
  std::map<int, std::size_t> per_fold;
  bool skipped_listed = false;
  for (const auto& count : data.verdicts) {
    const int rank = verdict_rank(count.verdict);
    if (rank == 0) facts.symmetric += count.images;
    if (rank == 1) facts.supported += count.images;
    if (rank == 2) facts.inconclusive += count.images;
    if (rank == 3) skipped_listed = true;
    if (rank < 2 && count.fold > 0) per_fold[count.fold] += count.images;
  }
  if (!skipped_listed && facts.skipped > 0) facts.verdicts.push_back({"skipped", 0, facts.skipped});
  for (const auto& [fold, images] : per_fold)
    if (images > facts.lead_images) std::tie(facts.lead_fold, facts.lead_images) = std::tuple(fold, images);
  std::stable_sort(facts.verdicts.begin(), facts.verdicts.end(), [](const auto& a, const auto& b) {
    const int rank_a = verdict_rank(a.verdict), rank_b = verdict_rank(b.verdict);
    return std::tie(rank_a, b.images, a.fold) < std::tie(rank_b, a.images, b.fold);
  });
  return facts;
}

double quantile(std::span<const double> values, double share) {
  std::vector<double> sorted;
  std::copy_if(values.begin(), values.end(), std::back_inserter(sorted),
               [](double value) { return std::isfinite(value); });
  if (sorted.empty()) return std::numeric_limits<double>::quiet_NaN();
  std::sort(sorted.begin(), sorted.end());
  const double at = share * static_cast<double>(sorted.size() - 1);
  const auto below = static_cast<std::size_t>(at);
  const std::size_t above = std::min(below + 1, sorted.size() - 1);
  return sorted[below] + (at - static_cast<double>(below)) * (sorted[above] - sorted[below]);
}

Histogram histogram(std::span<const double> values) {
  const double last = quantile(values, 0.98);
  if (!std::isfinite(last)) return {};
  Histogram bins;
  bins.width = last > 0 ? round_down(last / 10) : 1;
  bins.counts.resize(static_cast<std::size_t>(last / bins.width) + 1);
  const double end = bins.width * static_cast<double>(bins.counts.size());
  for (const double value : values) {
    if (!std::isfinite(value)) continue;
    if (value >= end) ++bins.above;
    ++bins.counts[static_cast<std::size_t>(std::min(value / bins.width, static_cast<double>(bins.counts.size() - 1)))];
  }
  return bins;
}

std::vector<double> centre_errors(const ReportData& data) {
  std::vector<double> errors;
  errors.reserve(data.centres.size());
  for (const auto& centre : data.centres) errors.push_back(std::hypot(centre.se_x, centre.se_y) / std::sqrt(2.0));
  return errors;
}

}  // namespace tambour::report
