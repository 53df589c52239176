// Gauss-Legendre quadrature.
#pragma once

#include <vector>

namespace tambour::disk {

struct Quadrature {
  std::vector<double> nodes;
  std::vector<double> weights;
};

/// Nodes ascending in (lower, upper); exact for polynomials of degree 2 points - 1. Newton on the Legendre recurrence,
/// error 1e-15.
Quadrature gauss_legendre(int points, double lower, double upper);

/// `panels` equal panels of `points` nodes each.
Quadrature composite_gauss_legendre(int panels, int points, double lower, double upper);

}  // namespace tambour::disk
