#include "phantom/spectrum_shaping.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "phantom/small_fourier.hpp"

namespace tambour::tools::phantom {
namespace {

using Complex = std::complex<double>;

/// Radians per pixel of frequency i of n.
double frequency(std::ptrdiff_t i, std::ptrdiff_t n) {
  const auto wrapped = static_cast<double>(i <= n / 2 ? i : n - i);
  return 2 * std::numbers::pi * wrapped / static_cast<double>(n);
}

std::vector<Complex> transform_of(const Picture& picture) {
  std::vector<Complex> values(picture.pixels().begin(), picture.pixels().end());
  fourier_2d(values, picture.rows(), picture.columns(), Direction::forward);
  return values;
}

/// Smoothing along one axis of a padded field; the pad is as wide as the kernel's half.
std::vector<double> gaussian_kernel(double sigma) {
  const auto half = static_cast<std::ptrdiff_t>(std::ceil(4 * sigma));
  std::vector<double> kernel;
  for (std::ptrdiff_t i = -half; i <= half; ++i) {
    const double d = static_cast<double>(i) / sigma;
    kernel.push_back(std::exp(-d * d / 2));
  }
  return kernel;
}

}  // namespace

ColouredNoise::ColouredNoise(std::ptrdiff_t rows, std::ptrdiff_t columns)
    : rows_(rows), columns_(columns), spectrum_(static_cast<std::size_t>(rows * columns)) {
  constexpr double floor = 0.15;
  constexpr double knee = 0.5;
  double sum = 0;
  for (std::ptrdiff_t y = 0; y < rows; ++y)
    for (std::ptrdiff_t x = 0; x < columns; ++x) {
      const double q = std::hypot(frequency(x, columns), frequency(y, rows)) / knee;
      const double s = floor + 1 / (1 + q * q);
      spectrum_[static_cast<std::size_t>(y * columns + x)] = s;
      sum += s;
    }
  for (double& s : spectrum_) s *= static_cast<double>(rows * columns) / sum;
}

Picture ColouredNoise::draw(Random& random) const {
  Picture noise = white_noise(rows_, columns_, random);
  auto values = transform_of(noise);
  for (std::size_t i = 0; i < values.size(); ++i) values[i] *= std::sqrt(spectrum_[i]);
  fourier_2d(values, rows_, columns_, Direction::backward);
  const double norm = 1 / static_cast<double>(rows_ * columns_);
  for (std::size_t i = 0; i < values.size(); ++i) noise.pixels()[i] = values[i].real() * norm;
  return noise;
}

double ColouredNoise::whitened_sum(const Picture& picture) const {
  const auto values = transform_of(picture);
  double sum = 0;
  for (std::size_t i = 0; i < values.size(); ++i) sum += std::norm(values[i]) / spectrum_[i];
  return sum / static_cast<double>(rows_ * columns_);
}

Picture white_noise(std::ptrdiff_t rows, std::ptrdiff_t columns, Random& random) {
  Picture noise(rows, columns);
  for (double& pixel : noise.pixels()) pixel = random.normal();
  return noise;
}

Picture isotropic_field(std::ptrdiff_t rows, std::ptrdiff_t columns, Centre centre, double radius, double sigma,
                        Random& random) {
  const auto kernel = gaussian_kernel(sigma);
  const auto pad = static_cast<std::ptrdiff_t>(kernel.size()) - 1;
  const Picture wide = white_noise(rows + pad, columns + pad, random);
  Picture along_x(rows + pad, columns);
  for (std::ptrdiff_t y = 0; y < rows + pad; ++y)
    for (std::ptrdiff_t x = 0; x < columns; ++x)
      for (std::size_t i = 0; i < kernel.size(); ++i)
        along_x.view()(y, x) += kernel[i] * wide.view()(y, x + static_cast<std::ptrdiff_t>(i));
  Picture field(rows, columns);
  for (std::ptrdiff_t y = 0; y < rows; ++y)
    for (std::ptrdiff_t x = 0; x < columns; ++x) {
      double sum = 0;
      for (std::size_t i = 0; i < kernel.size(); ++i)
        sum += kernel[i] * along_x.view()(y + static_cast<std::ptrdiff_t>(i), x);
      const double r = std::hypot(static_cast<double>(x) - centre.x, static_cast<double>(y) - centre.y) / radius;
      const double t = std::clamp((0.95 - r) / 0.25, 0.0, 1.0);
      field.view()(y, x) = sum * t * t * (3 - 2 * t);
    }
  return field;
}

}  // namespace tambour::tools::phantom
