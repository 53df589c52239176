#include "disk/rings.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "disk/quadrature.hpp"
#include "fourier/buffer.hpp"

namespace tambour::disk {
namespace {

using std::numbers::pi;
constexpr double sqrt2 = std::numbers::sqrt2;

int ring_count(double radius, double bandlimit, double tolerance) {
  const double half = pi * radius * (sqrt2 + bandlimit) / 4;
  return static_cast<int>(std::ceil(half + 0.45 * std::pow(-std::log(tolerance), 2.0 / 3) * std::cbrt(half) + 6));
}

/// tail[n] = sum over m >= n of |J_m(x)|.
std::vector<double> tails(const BesselTable& table, double x) {
  std::vector<double> tail(table.last_order() + 1);
  double sum = 0;
  for (int n = table.last_order(); n >= 0; --n) {
    sum += std::abs(table.value(n, x));
    tail[n] = sum;
  }
  return tail;
}

double at(const std::vector<double>& tail, int n) { return n < static_cast<int>(tail.size()) ? tail[n] : 0; }

}  // namespace

std::vector<Ring> make_rings(const DiskBasis& basis, double tolerance) {
  const double radius = basis.radius(), bandlimit = basis.geometry().bandlimit;
  const Quadrature rule = gauss_legendre(ring_count(radius, bandlimit, tolerance), 0, radius);
  const double x_max = sqrt2 * pi * radius;
  const int last_order = static_cast<int>(x_max + 14 * std::cbrt(x_max) + 20);
  const BesselTable table(0, last_order, x_max);
  const double allowed = 0.15 * tolerance;

  std::vector<Ring> rings;
  for (std::size_t j = 0; j < rule.nodes.size(); ++j) {
    const double r = rule.nodes[j];
    const std::vector<double> of_term = tails(table, pi * bandlimit * r);
    const std::vector<double> of_image = tails(table, sqrt2 * pi * r);
    int highest = 0;
    while (highest < basis.max_order() && at(of_term, highest + 1) > allowed) ++highest;
    // Order n of a term meets the image's order angles - n as its alias.
    const auto aliases = [&](int angles) {
      double worst = 0;
      for (int n = 0; n <= highest; ++n) worst = std::max(worst, at(of_term, n) * at(of_image, angles - n));
      return worst;
    };
    int angles = fourier::next_fast_size(2 * highest + 1, 4);
    while (aliases(angles) > allowed) angles = fourier::next_fast_size(angles + 1, 4);
    rings.push_back({r, rule.weights[j] * r, angles, highest});
  }
  return rings;
}

}  // namespace tambour::disk
