// The Bayes factors of the N-fold test and the statistic made of them.
#pragma once

#include <span>
#include <vector>

#include "tambour/symmetry.hpp"

namespace tambour::study {

/// ln BF_N for a range of folds from whitened energies per shell and order; see SymmetryTest. Immutable, thread-safe.
class Evidence {
 public:
  Evidence(const Shells& shells, double root_limit, int first_fold, int last_fold, int images);

  int folds() const noexcept { return folds_; }
  int orders() const noexcept { return orders_; }
  /// `energies`: shells x orders, row-major, summed over the images. out: one ln BF per fold; -infinity for a fold
  /// without orders.
  void ln_bayes_factors(std::span<const double> energies, std::span<double> out) const;
  /// T = ln of the mean Bayes factor over folds.
  static double statistic(std::span<const double> ln_bf);

 private:
  int folds_, orders_;
  std::size_t shells_;
  std::vector<std::vector<std::size_t>> multiples_;  // per fold: orders >= 2 that are its multiples
  std::vector<double> total_degrees_;                // per shell: D_j
  std::vector<double> fold_degrees_;                 // per fold and shell: d_jN
  struct Profile {
    double shrink;  // t / (1 + t)
    double log;     // ln(1 + t)
  };
  std::vector<Profile> profiles_;  // per (A, L) and shell
  std::size_t settings_ = 0;       // pairs of (A, L)
};

/// ln of the mean of exp(values).
double log_mean_exp(std::span<const double> values);

}  // namespace tambour::study
