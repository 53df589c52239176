#include "tambour/preparation.hpp"

#include <fmt/format.h>

#include <Eigen/Dense>
#include <array>
#include <cmath>

#include "base/check.hpp"

namespace tambour {
namespace {

constexpr double outer_share = 1.3;  // of R: where the ring ends on which the background is fitted
constexpr std::ptrdiff_t fewest_pixels = 20;
constexpr double largest_magnitude = 1e100;  // its fourth power is a double: variances of energies stay finite

/// 1, u, v, u^2, u v, v^2.
std::array<double, 6> monomials(double u, double v) { return {1, u, v, u * u, u * v, v * v}; }

int unknowns(Background background) {
  switch (background) {
    case Background::none:
      return 0;
    case Background::constant:
      return 1;
    case Background::linear:
      return 3;
    case Background::quadratic:
      return 6;
  }
  throw Error(ErrorCode::internal, "unknown background");
}

/// Calls body(x, y) for every pixel of the frame with R < r < 1.3 R.
template <class Body>
void for_each_outside(std::ptrdiff_t rows, std::ptrdiff_t columns, Centre centre, double radius, const Body& body) {
  for (std::ptrdiff_t y = 0; y < rows; ++y) {
    for (std::ptrdiff_t x = 0; x < columns; ++x) {
      const double r = std::hypot(static_cast<double>(x) - centre.x, static_cast<double>(y) - centre.y);
      if (r > radius && r < outer_share * radius) body(x, y);
    }
  }
}

ImageStatus check_pixels(ImageView<const double> image) {
  double lowest = image(0, 0), highest = lowest;
  for (std::ptrdiff_t y = 0; y < image.rows; ++y) {
    for (std::ptrdiff_t x = 0; x < image.columns; ++x) {
      const double value = image(y, x);
      if (!std::isfinite(value))
        return {fmt::format("pixel (x {}, y {}) is {}; every pixel must be finite", x, y, value)};
      lowest = std::min(lowest, value);
      highest = std::max(highest, value);
    }
  }
  if (lowest == highest) return {fmt::format("every pixel is {:.6g}; a constant image holds no structure", lowest)};
  const double largest = std::max(std::abs(lowest), std::abs(highest));
  if (largest > largest_magnitude || largest < 1 / largest_magnitude)
    return {fmt::format("the largest pixel is {:.6g} in size; allowed is {:g} to {:g}", largest, 1 / largest_magnitude,
                        largest_magnitude)};
  return {};
}

}  // namespace

const char* to_string(Background background) {
  switch (background) {
    case Background::none:
      return "none";
    case Background::constant:
      return "constant";
    case Background::linear:
      return "linear";
    case Background::quadratic:
      return "quadratic";
  }
  throw Error(ErrorCode::internal, "unknown background");
}

const char* to_string(Scaling scaling) { return scaling == Scaling::none ? "none" : "outside-sd"; }

bool PreparationOptions::needs_outside() const noexcept {
  return background != Background::none || scaling != Scaling::none;
}

std::size_t Preparation::outside_pixels(std::ptrdiff_t rows, std::ptrdiff_t columns, double radius) {
  std::size_t count = 0;
  for_each_outside(rows, columns, frame_middle(rows, columns), radius, [&](auto, auto) { ++count; });
  return count;
}

bool Preparation::possible(std::ptrdiff_t rows, std::ptrdiff_t columns, double radius) {
  return outside_pixels(rows, columns, radius) >= fewest_pixels;
}

Preparation::Preparation(const PreparationOptions& options, std::ptrdiff_t rows, std::ptrdiff_t columns, double radius)
    : options_(options), rows_(rows), columns_(columns), radius_(radius) {
  if (options.needs_outside() && !possible(rows, columns, radius))
    throw Error(
        ErrorCode::invalid_argument,
        fmt::format(
            "background and scaling need at least {} pixels of the frame outside the disk; radius {} px leaves {} in "
            "{} x {} px (columns x rows)",
            fewest_pixels, radius, outside_pixels(rows, columns, radius), columns, rows),
        fmt::format("{}", radius), "a smaller radius, or background none and scaling none");
}

PreparedImage Preparation::apply(ImageView<double> image, Centre centre) const {
  require(image.rows == rows_ && image.columns == columns_, "shape of the image",
          fmt::format("{} x {}", image.rows, image.columns), fmt::format("{} x {}, as planned", rows_, columns_));
  PreparedImage result;
  result.status = check_pixels(image);
  if (!result.status.ok()) return result;
  const double sign = options_.invert_contrast ? -1 : 1;
  const auto u = [&](std::ptrdiff_t x) { return (static_cast<double>(x) - centre.x) / radius_; };
  const auto v = [&](std::ptrdiff_t y) { return (static_cast<double>(y) - centre.y) / radius_; };

  const int count = unknowns(options_.background);
  double scale = 1;
  if (options_.needs_outside()) {
    Eigen::MatrixXd normal = Eigen::MatrixXd::Zero(count, count);
    Eigen::VectorXd right = Eigen::VectorXd::Zero(count);
    std::ptrdiff_t pixels = 0;
    for_each_outside(rows_, columns_, centre, radius_, [&](std::ptrdiff_t x, std::ptrdiff_t y) {
      const auto all = monomials(u(x), v(y));
      const Eigen::Map<const Eigen::VectorXd> row(all.data(), count);
      normal.noalias() += row * row.transpose();
      right += sign * image(y, x) * row;
      ++pixels;
    });
    if (pixels < fewest_pixels) {
      result.status = {fmt::format("{} pixels lie outside the disk around ({:.6g}, {:.6g}); the background needs {}",
                                   pixels, centre.x, centre.y, fewest_pixels)};
      return result;
    }
    if (count > 0) Eigen::VectorXd::Map(result.background, count) = normal.ldlt().solve(right);
    double square = 0;
    for_each_outside(rows_, columns_, centre, radius_, [&](std::ptrdiff_t x, std::ptrdiff_t y) {
      const auto all = monomials(u(x), v(y));
      double residual = sign * image(y, x);
      for (int i = 0; i < count; ++i) residual -= result.background[i] * all[i];
      square += residual * residual;
    });
    result.outside_sd = std::sqrt(square / static_cast<double>(pixels - count));
    if (options_.scaling == Scaling::outside_sd) {
      if (!(result.outside_sd > 0)) {
        result.status = {"every pixel outside the disk lies on the background; there is no noise to scale by"};
        return result;
      }
      scale = 1 / result.outside_sd;
    }
  }
  for (std::ptrdiff_t y = 0; y < rows_; ++y) {
    for (std::ptrdiff_t x = 0; x < columns_; ++x) {
      const auto all = monomials(u(x), v(y));
      double value = sign * image(y, x);
      for (int i = 0; i < count; ++i) value -= result.background[i] * all[i];
      image(y, x) = scale * value;
    }
  }
  return result;
}

}  // namespace tambour
