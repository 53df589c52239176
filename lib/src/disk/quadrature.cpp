#include "disk/quadrature.hpp"

#include <cmath>
#include <numbers>

namespace tambour::disk {

Quadrature gauss_legendre(int points, double lower, double upper) {
  Quadrature rule{std::vector<double>(points), std::vector<double>(points)};
  const double middle = (lower + upper) / 2, half = (upper - lower) / 2;
  for (int i = 0; i < points; ++i) {
    double x = -std::cos(std::numbers::pi * (i + 0.75) / (points + 0.5));
    double slope = 0;
    for (int step = 0; step < 10; ++step) {
      double previous = 1, value = x;
      for (int n = 1; n < points; ++n) {
        const double next = ((2 * n + 1) * x * value - n * previous) / (n + 1);
        previous = value;
        value = next;
      }
      slope = points * (previous - x * value) / (1 - x * x);
      const double move = value / slope;
      x -= move;
      if (std::abs(move) < 1e-15) break;
    }
    rule.nodes[i] = middle + half * x;
    rule.weights[i] = half * 2 / ((1 - x * x) * slope * slope);
  }
  return rule;
}

Quadrature composite_gauss_legendre(int panels, int points, double lower, double upper) {
  const Quadrature unit = gauss_legendre(points, 0, 1);
  Quadrature rule;
  const double width = (upper - lower) / panels;
  for (int panel = 0; panel < panels; ++panel) {
    for (int i = 0; i < points; ++i) {
      rule.nodes.push_back(lower + width * (panel + unit.nodes[i]));
      rule.weights.push_back(width * unit.weights[i]);
    }
  }
  return rule;
}

}  // namespace tambour::disk
