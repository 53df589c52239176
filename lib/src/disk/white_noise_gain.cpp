#include "disk/white_noise_gain.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "disk/quadrature.hpp"

namespace tambour::disk {
namespace {

using std::numbers::pi;
constexpr double sqrt2 = std::numbers::sqrt2;

int panels_for(double length) { return static_cast<int>(std::ceil(length / 3)) + 1; }

}  // namespace

WhiteNoiseGain::WhiteNoiseGain(Edge edge, double radius, int max_order)
    : edge_(edge), table_(0, max_order + 1, sqrt2 * pi * radius) {
  const double edge_of_band = pi * radius;
  const Quadrature inner = composite_gauss_legendre(panels_for(edge_of_band), 8, 0, edge_of_band);
  for (std::size_t i = 0; i < inner.nodes.size(); ++i) {
    node_.push_back(inner.nodes[i]);
    weight_.push_back(inner.weights[i] * inner.nodes[i]);
  }
  // Between the side and the corner of the square, q = pi / cos t makes chi = 1 - 4 t / pi smooth.
  const Quadrature outer = composite_gauss_legendre(panels_for(edge_of_band), 8, 0, pi / 4);
  for (std::size_t i = 0; i < outer.nodes.size(); ++i) {
    const double t = outer.nodes[i];
    const double b = edge_of_band / std::cos(t);
    node_.push_back(std::min(b, table_.x_max()));
    weight_.push_back(outer.weights[i] * b * std::tan(t) * b * (1 - 4 * t / pi));
  }
}

std::vector<double> WhiteNoiseGain::of_order(int order, std::span<const double> roots) const {
  const std::size_t nodes = node_.size();
  std::vector<double> at_node(nodes), above(nodes);
  table_.values(order, node_.data(), nodes, at_node.data());
  if (edge_ == Edge::neumann) {
    // b J_n'(b) = n J_n(b) - b J_{n+1}(b)
    table_.values(order + 1, node_.data(), nodes, above.data());
    for (std::size_t i = 0; i < nodes; ++i) at_node[i] = order * at_node[i] - node_[i] * above[i];
  }
  // Lommel: H(b) = a J_{n+1}(a) J_n(b) / (a^2 - b^2) at a Dirichlet root a, b J_n(a) J_n'(b) / (a^2 - b^2) at a Neumann
  // one; the squares of J_{n+1}(a) and J_n(a) follow from the norm.
  std::vector<double> gain;
  for (std::size_t k = 0; k < roots.size(); ++k) {
    const double a = roots[k];
    double factor = 2 * a * a;  // a^2 J_{n+1}(a)^2 / N
    if (edge_ == Edge::neumann) factor = a > 0 ? 2 / ((1 - order / a) * (1 + order / a)) : 2;
    double sum = 0;
    for (std::size_t i = 0; i < nodes; ++i) {
      const double ratio = at_node[i] / ((a - node_[i]) * (a + node_[i]));
      sum += weight_[i] * ratio * ratio;
    }
    gain.push_back(factor * sum);
  }
  return gain;
}

}  // namespace tambour::disk
