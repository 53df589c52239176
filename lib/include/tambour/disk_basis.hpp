// The terms of a disk expansion: which orders and roots there are, in which order they are stored.
#pragma once

#include <cstddef>
#include <memory>
#include <span>
#include <string>
#include <vector>

#include "tambour/bessel.hpp"

namespace tambour {

/// Position of a rotation centre in pixels: x = column, y = row, (0, 0) = centre of the first pixel.
struct Centre {
  double x = 0;
  double y = 0;
};

/// Middle of a frame, ((columns - 1) / 2, (rows - 1) / 2).
inline Centre frame_middle(std::ptrdiff_t rows, std::ptrdiff_t columns) {
  return {(static_cast<double>(columns) - 1) / 2, (static_cast<double>(rows) - 1) / 2};
}

/// One basis function psi_nk(r, theta) = normalisation * J_n(root r / R) e^{i n theta}.
struct Term {
  int angular_order;        ///< n >= 0; orders -n are the complex conjugates for real images
  int radial_index;         ///< k, from 1
  double root;              ///< lambda_nk; spatial frequency root / (2 pi R) cycles per pixel
  double normalisation;     ///< c_nk > 0 in 1/px: the integral of |psi_nk|^2 over the disk is 1
  double white_noise_gain;  ///< v_nk: white pixel noise of variance s^2 gives E|a_nk|^2 = v_nk s^2
};

/// What fixes a basis.
struct DiskGeometry {
  double radius = 0;            ///< R in pixels, may be fractional; 4 .. 1000
  Edge edge = Edge::dirichlet;  ///< condition at the rim
  double bandlimit = 0.9;       ///< beta: terms with root <= pi R beta; 0 < beta <= 1

  /// Everything that is wrong, one sentence each; empty if nothing is.
  std::vector<std::string> problems() const;
};

/// The terms with root <= pi R beta, sorted by angular order, then by root.
///
/// Immutable, cheap to copy (shared), thread-safe. Throws Error(invalid_argument) listing every problem of the
/// geometry, or when no term lies under the band limit. Cost: some milliseconds at R = 40, under a second at R = 250.
class DiskBasis {
 public:
  explicit DiskBasis(const DiskGeometry& geometry);

  const DiskGeometry& geometry() const noexcept;
  double radius() const noexcept { return geometry().radius; }
  /// lambda_max = pi R beta.
  double root_limit() const noexcept;

  std::span<const Term> terms() const noexcept;
  std::size_t size() const noexcept { return terms().size(); }
  /// Largest angular order with a term.
  int max_order() const noexcept;
  /// Index of the first term of an order; order_begin(max_order() + 1) = size(). Throws Error outside 0 ..
  /// max_order()+1.
  std::size_t order_begin(int angular_order) const;
  /// The terms of one order.
  std::span<const Term> order(int angular_order) const;

  /// Radial part c_nk J_n(lambda_nk r / R) of a term at r in pixels, 0 <= r <= R. Error: 1e-13 of its amplitude.
  double radial(std::size_t term, double r) const;

 private:
  struct Data;
  std::shared_ptr<const Data> data_;
};

/// Energy of an expansion, sum_k a_0k^2 + 2 sum_{n>0,k} |a_nk|^2: the weight of a term in every sum over both signs of
/// n.
inline double sign_weight(const Term& term) { return term.angular_order == 0 ? 1.0 : 2.0; }

}  // namespace tambour
