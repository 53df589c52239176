#include <boost/math/special_functions/bessel.hpp>

#include "base/check.hpp"
#include "tambour/bessel.hpp"

namespace tambour {
namespace {

constexpr int kMaxOrder = 5000;
constexpr double kMaxRoot = 1e6;

}  // namespace

double bessel_norm(int order, Edge edge, double root) {
  require(order >= 0 && order <= kMaxOrder, "order of the Bessel norm", order, fmt::format("0 to {}", kMaxOrder));
  if (edge == Edge::neumann && order == 0 && root == 0) return 0.5;
  require(root > order && root <= kMaxRoot, "root of the Bessel norm", root,
          fmt::format("above the order {}, up to {}", order, kMaxRoot));
  const double n = order;
  const double value = boost::math::cyl_bessel_j(order, root);
  const double weight = (root - n) * (root + n) / (root * root);
  if (edge == Edge::neumann) return 0.5 * weight * value * value;
  // The whole of Lommel's integral, (J_n'^2 + (1 - n^2/x^2) J_n^2) / 2, is stationary at the root. J_{n+1}^2 / 2 alone
  // would turn the rounding of the root into a relative error of 2 (n+1) roundings.
  const double slope = n / root * value - boost::math::cyl_bessel_j(order + 1, root);
  return 0.5 * (slope * slope + weight * value * value);
}

}  // namespace tambour
