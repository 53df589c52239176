#include "tambour/radius.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <numbers>

#include "base/check.hpp"

namespace tambour {
namespace {

constexpr std::size_t most_images = 256;
constexpr double faded = 0.05;           // of the largest excess
constexpr double margin = 3;             // px for the objects' own offsets
constexpr double smallest = 4;           // px
constexpr double largest_radius = 1000;  // px, as DiskGeometry allows
constexpr std::size_t rim_bins = 3;      // px of radius that tell the rim's level
constexpr double least_errors = 4;       // standard errors that make an excess real

/// Per pixel of radius: count, and sums of the values and of their squares.
struct Profile {
  std::vector<double> count, sum, squares;
  explicit Profile(std::size_t size) : count(size), sum(size), squares(size) {}
};

void add_image(ImageView<const double> image, Profile& profile) {
  const Centre middle = frame_middle(image.rows, image.columns);
  for (std::ptrdiff_t y = 0; y < image.rows; ++y)
    for (std::ptrdiff_t x = 0; x < image.columns; ++x) {
      const auto bin =
          static_cast<std::size_t>(std::hypot(static_cast<double>(x) - middle.x, static_cast<double>(y) - middle.y));
      if (bin >= profile.count.size() || !std::isfinite(image(y, x))) continue;
      profile.count[bin] += 1;
      profile.sum[bin] += image(y, x);
      profile.squares[bin] += image(y, x) * image(y, x);
    }
}

/// Mean squared deviation from the image's own level at the rim, per pixel of radius.
std::vector<double> deviation(const Profile& profile) {
  const std::size_t bins = profile.count.size();
  double count = 0, sum = 0;
  for (std::size_t bin = bins - rim_bins; bin < bins; ++bin) {
    count += profile.count[bin];
    sum += profile.sum[bin];
  }
  const double level = count > 0 ? sum / count : 0;
  std::vector<double> result;
  for (std::size_t bin = 0; bin < bins; ++bin) {
    const double n = std::max(profile.count[bin], 1.0);
    result.push_back((profile.squares[bin] - 2 * level * profile.sum[bin] + level * level * profile.count[bin]) / n);
  }
  return result;
}

}  // namespace

RadiusEstimate estimate_radius(const ImageSource& source, double search, Executor& executor) {
  const std::ptrdiff_t rows = source.rows(), columns = source.columns();
  require(search >= 0, "search", search, "0 px or more");
  const double room = std::min(std::floor(static_cast<double>(std::min(rows, columns)) / 2 - search), largest_radius);
  if (room < smallest)
    throw Error(ErrorCode::bad_input, fmt::format("{}: a frame of {} x {} px (columns x rows) leaves no disk of {} px "
                                                  "radius with {} px to search around its middle",
                                                  source.name(0), columns, rows, smallest, search));
  const std::size_t looked = std::min(source.images(), most_images);
  const auto bins = static_cast<std::size_t>(std::min(rows, columns) / 2);
  std::vector<std::vector<double>> of_image(looked);
  executor.run(looked, [&](std::size_t i, int) {
    std::vector<double> pixels(rows * columns);
    const ImageView<double> view(pixels.data(), rows, columns);
    if (!source.read(i * source.images() / looked, view).ok()) return;
    Profile profile(bins);
    add_image(view, profile);
    of_image[i] = deviation(profile);
  });

  RadiusEstimate estimate;
  std::vector<double> mean(bins, 0.0);
  for (const auto& one : of_image) {
    if (one.empty()) continue;
    ++estimate.images;
    for (std::size_t bin = 0; bin < bins; ++bin) mean[bin] += one[bin];
  }
  if (estimate.images == 0)
    throw Error(ErrorCode::bad_input, fmt::format("{}: no image of the stack can be read", source.name(0)));
  for (double& value : mean) value /= static_cast<double>(estimate.images);

  double floor = 0;
  for (std::size_t bin = bins - rim_bins; bin < bins; ++bin) floor += mean[bin] / static_cast<double>(rim_bins);
  std::vector<bool> significant;
  for (std::size_t bin = 0; bin < bins; ++bin) {
    estimate.excess.push_back(mean[bin] - floor);
    // A ring of width 1 holds 2 pi r pixels; the mean square of n normal deviates has the relative error sqrt(2 / n).
    const double pixels =
        2 * std::numbers::pi * (static_cast<double>(bin) + 0.5) * static_cast<double>(estimate.images);
    significant.push_back(mean[bin] - floor > least_errors * floor * std::sqrt(2 / pixels));
  }
  const double largest = *std::max_element(estimate.excess.begin(), estimate.excess.end());
  std::size_t end = bins;
  while (end > 0 && !(significant[end - 1] && estimate.excess[end - 1] > faded * largest)) --end;
  const double wanted = std::ceil(static_cast<double>(end) + margin);
  estimate.object_ends = end > 0 && wanted <= room;
  estimate.radius = estimate.object_ends ? std::max(wanted, smallest) : room;
  if (largest > 0)
    for (double& value : estimate.excess) value /= largest;
  return estimate;
}

}  // namespace tambour
