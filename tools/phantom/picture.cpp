#include "phantom/picture.hpp"

namespace tambour::tools::phantom {

void Picture::add(double factor, const Picture& other) {
  for (std::size_t i = 0; i < pixels_.size(); ++i) pixels_[i] += factor * other.pixels_[i];
}

void Picture::scale(double factor) {
  for (double& pixel : pixels_) pixel *= factor;
}

DiskMoments disk_moments(const Picture& picture, Centre centre, double radius) {
  const auto view = picture.view();
  double count = 0;
  double sum = 0;
  double squares = 0;
  for (std::ptrdiff_t y = 0; y < view.rows; ++y)
    for (std::ptrdiff_t x = 0; x < view.columns; ++x) {
      const double dx = static_cast<double>(x) - centre.x;
      const double dy = static_cast<double>(y) - centre.y;
      if (dx * dx + dy * dy > radius * radius) continue;
      count += 1;
      sum += view(y, x);
      squares += view(y, x) * view(y, x);
    }
  DiskMoments moments;
  moments.mean = sum / count;
  moments.variance = squares / count - moments.mean * moments.mean;
  return moments;
}

}  // namespace tambour::tools::phantom
