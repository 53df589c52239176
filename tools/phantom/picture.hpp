// An image that owns its pixels, and sums over a disk.
#pragma once

#include <cstddef>
#include <vector>

#include "tambour/disk_basis.hpp"
#include "tambour/views.hpp"

namespace tambour::tools::phantom {

class Picture {
 public:
  Picture(std::ptrdiff_t rows, std::ptrdiff_t columns)
      : rows_(rows), columns_(columns), pixels_(static_cast<std::size_t>(rows * columns), 0.0) {}

  std::ptrdiff_t rows() const noexcept { return rows_; }
  std::ptrdiff_t columns() const noexcept { return columns_; }
  ImageView<double> view() { return {pixels_.data(), rows_, columns_}; }
  ImageView<const double> view() const { return {pixels_.data(), rows_, columns_}; }
  std::vector<double>& pixels() noexcept { return pixels_; }
  const std::vector<double>& pixels() const noexcept { return pixels_; }

  /// this += factor * other
  void add(double factor, const Picture& other);
  void scale(double factor);

 private:
  std::ptrdiff_t rows_;
  std::ptrdiff_t columns_;
  std::vector<double> pixels_;
};

/// Mean and variance of the pixels within a disk.
struct DiskMoments {
  double mean = 0;
  double variance = 0;
};
DiskMoments disk_moments(const Picture& picture, Centre centre, double radius);

}  // namespace tambour::tools::phantom
