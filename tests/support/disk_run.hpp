// DiskTransform over vectors, for tests.
#pragma once

#include <algorithm>
#include <cmath>
#include <complex>
#include <cstddef>
#include <limits>
#include <random>
#include <vector>

#include "tambour/disk_transform.hpp"

namespace tambour::testing {

template <class T>
DiskTransform<T> disk_plan(std::ptrdiff_t rows, std::ptrdiff_t columns, const DiskGeometry& geometry,
                           double tolerance = 0) {
  DiskTransformOptions options;
  options.geometry = geometry;
  options.rows = rows;
  options.columns = columns;
  options.tolerance = tolerance;
  return DiskTransform<T>(options);
}

/// Coefficients of images that lie one after another; one row of terms per image.
template <class T>
std::vector<std::complex<T>> analyse(const DiskTransform<T>& plan, const std::vector<T>& images,
                                     const std::vector<Centre>& centres, std::vector<ImageStatus>* statuses = nullptr) {
  const std::ptrdiff_t rows = plan.options().rows, columns = plan.options().columns;
  const auto count = static_cast<std::ptrdiff_t>(images.size()) / (rows * columns);
  const auto terms = static_cast<std::ptrdiff_t>(plan.basis().size());
  std::vector<std::complex<T>> coefficients(count * terms);
  std::vector<ImageStatus> own(count);
  auto workspace = plan.make_workspace();
  plan.analyse(StackView<const T>(images.data(), count, rows, columns), centres, {coefficients.data(), count, terms},
               statuses ? *statuses : own, workspace);
  return coefficients;
}

/// Images of coefficients, one after another.
template <class T>
std::vector<T> synthesise(const DiskTransform<T>& plan, const std::vector<std::complex<T>>& coefficients,
                          const std::vector<Centre>& centres) {
  const std::ptrdiff_t rows = plan.options().rows, columns = plan.options().columns;
  const auto terms = static_cast<std::ptrdiff_t>(plan.basis().size());
  const auto count = static_cast<std::ptrdiff_t>(coefficients.size()) / terms;
  std::vector<T> images(count * rows * columns);
  auto workspace = plan.make_workspace();
  plan.synthesise(MatrixView<const std::complex<T>>(coefficients.data(), count, terms), centres,
                  {images.data(), count, rows, columns}, workspace);
  return images;
}

/// White noise whose values are exact in float.
template <class T>
std::vector<T> white_noise(std::size_t count, unsigned seed) {
  std::mt19937 engine(seed);
  std::normal_distribution<float> normal;
  std::vector<T> values(count);
  for (T& value : values) value = normal(engine);
  return values;
}

/// max |a - b| / max |b|.
template <class A, class B>
double relative_difference(const std::vector<std::complex<A>>& a, const std::vector<std::complex<B>>& b) {
  double worst = 0, largest = 0;
  for (std::size_t i = 0; i < a.size(); ++i) {
    const auto difference = static_cast<double>(std::abs(std::complex<B>(a[i]) - b[i]));
    if (!std::isfinite(difference)) return std::numeric_limits<double>::infinity();
    worst = std::max(worst, difference);
    largest = std::max(largest, static_cast<double>(std::abs(b[i])));
  }
  return worst / largest;
}

}  // namespace tambour::testing
