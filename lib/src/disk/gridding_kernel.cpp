#include "disk/gridding_kernel.hpp"

#include <Eigen/Dense>
#include <algorithm>
#include <cmath>
#include <numbers>

#include "base/check.hpp"
#include "tambour/bessel.hpp"

namespace tambour::disk {
namespace {

using std::numbers::pi;

double kaiser_bessel(double shape, double x) {
  const double inside = 1 - x * x;
  if (inside < 0) return 0;
  const double argument = shape * std::sqrt(inside);
  return bessel_i0_scaled(argument) * std::exp(argument - shape) / bessel_i0_scaled(shape);
}

}  // namespace

GriddingKernel::GriddingKernel(int width, double oversampling)
    : width_(width), shape_(0.995 * pi * width * (1 - 1 / (2 * oversampling))), degree_(width + 6) {
  require(width >= 4 && width <= 16, "kernel width", width, "4 to 16");
  require(oversampling >= 1.25 && oversampling <= 4, "oversampling", oversampling, "1.25 to 4");
  // Per tap, phi is an entire function of its place: interpolation at Chebyshev points gives its polynomial.
  const int points = degree_ + 1;
  Eigen::VectorXd node(points);
  for (int i = 0; i < points; ++i) node[i] = std::cos(pi * (i + 0.5) / points);
  Eigen::MatrixXd powers(points, points), samples(points, width);
  for (int i = 0; i < points; ++i) {
    for (int d = 0; d < points; ++d) powers(i, d) = std::pow(node[i], degree_ - d);
    for (int tap = 0; tap < width; ++tap) samples(i, tap) = value(width / 2.0 - 0.5 + node[i] / 2 - tap);
  }
  const Eigen::MatrixXd solution = powers.fullPivHouseholderQr().solve(samples);
  coefficients_.resize(static_cast<std::size_t>(points) * width);
  for (int d = 0; d < points; ++d)
    for (int tap = 0; tap < width; ++tap) coefficients_[static_cast<std::size_t>(d) * width + tap] = solution(d, tap);
}

GriddingKernel GriddingKernel::for_tolerance(double tolerance, double oversampling) {
  const double digits = -std::log10(tolerance);
  // Widths that reach 1e-6 and 1e-12 on white noise: 8 and 14 down to sigma = 1.75, 9 and 16 at sigma = 1.5. One less
  // misses the wanted error by a tenth for some images.
  const double at_two = digits + 2, at_three_halves = digits * 4 / 3 + 1;
  const double share = std::clamp((1.75 - oversampling) / 0.25, 0.0, 1.0);
  const double width = at_two + share * std::max(at_three_halves - at_two, 0.0);
  return {std::clamp(static_cast<int>(std::ceil(width - 1e-9)), 4, 16), oversampling};
}

double GriddingKernel::value(double t) const { return kaiser_bessel(shape_, 2 * t / width_); }

double GriddingKernel::transform(double omega) const {
  const double half = omega * width_ / 2;
  const double square = shape_ * shape_ - half * half;
  const double root = std::sqrt(std::abs(square));
  // e^{-b} from the scaled I_0 is folded into the hyperbolic sine, which would overflow for wide kernels otherwise.
  const double scale = width_ / bessel_i0_scaled(shape_);
  if (root < 1e-8) return scale * std::exp(-shape_);
  if (square > 0) return scale * (std::exp(root - shape_) - std::exp(-root - shape_)) / (2 * root);
  return scale * std::exp(-shape_) * std::sin(root) / root;
}

int GriddingKernel::first_point(double u, int width) { return static_cast<int>(std::ceil(u - width / 2.0)); }

template <class T>
void GriddingKernel::weights(double u, T* out) const {
  // u - first_point lies in (w/2 - 1, w/2]; the polynomials' variable runs over [-1, 1] there.
  const double place = 2 * (u - first_point(u, width_) - (width_ / 2.0 - 0.5));
  double sum[16] = {};
  const double* row = coefficients_.data();
  for (int d = 0; d <= degree_; ++d, row += width_)
    for (int tap = 0; tap < width_; ++tap) sum[tap] = sum[tap] * place + row[tap];
  for (int tap = 0; tap < width_; ++tap) out[tap] = static_cast<T>(sum[tap]);
}

template void GriddingKernel::weights(double, float*) const;
template void GriddingKernel::weights(double, double*) const;

}  // namespace tambour::disk
