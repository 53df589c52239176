// The Bayes factors of the N-fold test and the statistic made of them.
#pragma once

#include <Eigen/Dense>
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
  Eigen::VectorXd total_degrees_;                    // per shell: D_j
  Eigen::ArrayXXd shrink_;                           // shells x settings of (A, L): t / (1 + t)
  Eigen::MatrixXd penalty_;                          // settings x folds: sum_j d_jN / 2 ln(1 + t_j)
};

/// ln of the mean of exp(values).
double log_mean_exp(std::span<const double> values);

}  // namespace tambour::study
