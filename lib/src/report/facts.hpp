// What several sections say about a survey, worked out once.
#pragma once

#include <cstddef>
#include <span>
#include <string>
#include <vector>

#include "tambour/report.hpp"

namespace tambour::report {

struct Facts {
  std::size_t skipped = 0;       ///< images that were not analysed
  std::size_t symmetric = 0;     ///< images with that verdict, any fold
  std::size_t supported = 0;     ///< images with verdict best_supported, any fold
  std::size_t inconclusive = 0;  ///< images with that verdict
  int lead_fold = 0;             ///< fold of most images of the first two kinds; 0 = none
  std::size_t lead_images = 0;
  std::vector<ReportVerdictCount>
      verdicts;  ///< from symmetric to skipped, most frequent first; skipped added if it was not listed
};

Facts gather(const ReportData& data);

/// Rank of a verdict in lists and pictures: symmetric 0, best_supported 1, inconclusive 2, skipped 3, others 4.
int verdict_rank(const std::string& verdict);

/// Quantile of the finite values, linear between order statistics; NaN when there are none. `share` in 0 .. 1.
double quantile(std::span<const double> values, double share);

/// Numbers of values per bin; the last bin also holds everything above.
struct Histogram {
  double width = 0;
  std::vector<std::size_t> counts;  ///< bin i: i width <= value < (i + 1) width
  std::size_t above = 0;            ///< of the last bin: beyond its upper edge
};

/// Bins of a round width from 0 to about the 98 % quantile; empty without finite values. Values must not be negative.
Histogram histogram(std::span<const double> values);

/// Root mean square of the two standard errors of each centre, px.
std::vector<double> centre_errors(const ReportData& data);

}  // namespace tambour::report
