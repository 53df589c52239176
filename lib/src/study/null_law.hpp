// How large the statistic gets when there is nothing but noise.
#pragma once

#include <cstdint>
#include <vector>

#include "study/evidence.hpp"
#include "tambour/executor.hpp"

namespace tambour::study {

/// Draws of T from energies that are chi-squared in every shell and order, and an exponential tail beyond them.
///
/// Beyond the hundredth part of largest draws (threshold u): p = 0.01 exp(-(T - u) / max(mean excess, 1)). The draws
/// depend on the seed only, not on the executor. Immutable, thread-safe.
class NullLaw {
 public:
  NullLaw(const Evidence& evidence, const Shells& shells, int images, int draws, std::uint64_t seed,
          Executor& executor);

  /// Probability of a statistic of at least `t`.
  double p_value(double t) const;

 private:
  std::vector<double> sorted_;  // ascending
  double threshold_ = 0;
  double excess_ = 1;
};

}  // namespace tambour::study
