#include "phantom/scene.hpp"

#include <cmath>

namespace tambour::tools::phantom {
namespace {

/// exp(-(i - place)^2 / (2 sigma^2)) for every pixel along one axis.
std::vector<double> profile(std::ptrdiff_t count, double place, double sigma) {
  std::vector<double> values(static_cast<std::size_t>(count));
  for (std::ptrdiff_t i = 0; i < count; ++i) {
    const double d = (static_cast<double>(i) - place) / sigma;
    values[static_cast<std::size_t>(i)] = std::exp(-d * d / 2);
  }
  return values;
}

}  // namespace

void Drawing::scale(double factor) {
  value.scale(factor);
  along_x.scale(factor);
  along_y.scale(factor);
}

void Drawing::add(double factor, const Drawing& other) {
  value.add(factor, other.value);
  along_x.add(factor, other.along_x);
  along_y.add(factor, other.along_y);
}

void draw(const std::vector<Blob>& blobs, Centre centre, Drawing& drawing) {
  const auto value = drawing.value.view();
  const auto along_x = drawing.along_x.view();
  const auto along_y = drawing.along_y.view();
  for (const auto& blob : blobs) {
    const double x0 = centre.x + blob.r * std::cos(blob.theta);
    const double y0 = centre.y + blob.r * std::sin(blob.theta);
    const auto over_x = profile(value.columns, x0, blob.sigma);
    const auto over_y = profile(value.rows, y0, blob.sigma);
    const double s2 = blob.sigma * blob.sigma;
    for (std::ptrdiff_t y = 0; y < value.rows; ++y)
      for (std::ptrdiff_t x = 0; x < value.columns; ++x) {
        const double g = blob.amplitude * over_x[static_cast<std::size_t>(x)] * over_y[static_cast<std::size_t>(y)];
        value(y, x) += g;
        along_x(y, x) -= g * (static_cast<double>(x) - x0) / s2;
        along_y(y, x) -= g * (static_cast<double>(y) - y0) / s2;
      }
  }
}

void draw(const Annulus& annulus, Centre centre, Drawing& drawing) {
  const auto value = drawing.value.view();
  const auto along_x = drawing.along_x.view();
  const auto along_y = drawing.along_y.view();
  const double s2 = annulus.sigma * annulus.sigma;
  for (std::ptrdiff_t y = 0; y < value.rows; ++y)
    for (std::ptrdiff_t x = 0; x < value.columns; ++x) {
      const double dx = static_cast<double>(x) - centre.x;
      const double dy = static_cast<double>(y) - centre.y;
      const double r = std::hypot(dx, dy);
      const double d = r - annulus.radius;
      const double g = std::exp(-d * d / (2 * s2));
      value(y, x) += g;
      if (r == 0) continue;
      along_x(y, x) -= g * d / s2 * dx / r;
      along_y(y, x) -= g * d / s2 * dy / r;
    }
}

}  // namespace tambour::tools::phantom
