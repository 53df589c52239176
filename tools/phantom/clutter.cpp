#include "phantom/clutter.hpp"

#include <cmath>

#include "phantom/scene.hpp"

namespace tambour::tools::phantom {
namespace {

void to_unit_variance(Picture& picture, Centre centre, double radius) {
  picture.scale(1 / std::sqrt(disk_moments(picture, centre, radius).variance));
}

}  // namespace

Picture gradient(std::ptrdiff_t rows, std::ptrdiff_t columns, Centre centre, double radius, Random& random) {
  const double slope = random.angle();
  const double axis = random.angle();
  Picture picture(rows, columns);
  for (std::ptrdiff_t y = 0; y < rows; ++y)
    for (std::ptrdiff_t x = 0; x < columns; ++x) {
      const double u = (static_cast<double>(x) - centre.x) / radius;
      const double v = (static_cast<double>(y) - centre.y) / radius;
      const double linear = u * std::cos(slope) + v * std::sin(slope);
      const double saddle = (u * u - v * v) * std::cos(2 * axis) + 2 * u * v * std::sin(2 * axis);
      picture.view()(y, x) = 2 * linear + 0.6 * saddle + 0.4 * (u * u + v * v);
    }
  to_unit_variance(picture, centre, radius);
  return picture;
}

Picture contaminant(std::ptrdiff_t rows, std::ptrdiff_t columns, Centre centre, double radius, Random& random) {
  const double r = random.uniform(0.6, 0.95) * radius;
  const double theta = random.angle();
  const Centre place{centre.x + r * std::cos(theta), centre.y + r * std::sin(theta)};
  std::vector<Blob> blobs;
  for (int i = 0; i < 3; ++i) {
    const double away = 2.5 * std::sqrt(random.uniform());
    const double direction = random.angle();
    blobs.push_back({away, direction, random.uniform(1.3, 2.5), 1});
  }
  Drawing drawing(rows, columns);
  draw(blobs, place, drawing);
  to_unit_variance(drawing.value, centre, radius);
  return drawing.value;
}

}  // namespace tambour::tools::phantom
