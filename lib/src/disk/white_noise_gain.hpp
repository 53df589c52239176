// How much of a term lies inside the pixel band.
#pragma once

#include <span>
#include <vector>

#include "tambour/bessel.hpp"

namespace tambour::disk {

/// v_nk for terms of the orders 0 .. max_order: the share of the term's energy whose spatial frequency lies in the
/// square |q_x|, |q_y| <= pi of the pixel grid.
///
/// v = (1/N) integral H(q R)^2 chi(q) q R^2 dq with the Lommel integral H(b) = integral_0^1 J_n(root x) J_n(b x) x dx,
/// N its norm, and chi the part of the circle |q| inside the square. Error: 1e-5.
class WhiteNoiseGain {
 public:
  WhiteNoiseGain(Edge edge, double radius, int max_order);
  /// One value per root of one order.
  std::vector<double> of_order(int order, std::span<const double> roots) const;

 private:
  Edge edge_;
  std::vector<double> node_;    // b = q R
  std::vector<double> weight_;  // quadrature weight times b chi
  BesselTable table_;
};

}  // namespace tambour::disk
