#include "report/picture.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/check.hpp"
#include "report/text.hpp"
#include "tambour/files.hpp"

namespace tambour::report {
namespace {

constexpr std::ptrdiff_t kLongestSide = 256;

}  // namespace

GreyRange robust_range(const ReportPicture& picture) {
  std::vector<float> values;
  values.reserve(picture.pixels.size());
  std::copy_if(picture.pixels.begin(), picture.pixels.end(), std::back_inserter(values),
               [](float value) { return std::isfinite(value); });
  if (values.empty()) return {0, 0};
  const auto percentile = [&](double share) {
    const auto at = values.begin() + std::lround(share * static_cast<double>(values.size() - 1));
    std::nth_element(values.begin(), at, values.end());
    return static_cast<double>(*at);
  };
  const double low = percentile(0.005);
  return {low, percentile(0.995)};
}

GreyRange about_zero(const GreyRange& range) {
  const double half = (range.high - range.low) / 2;
  return {-half, half};
}

ReportPicture reduced(const ReportPicture& picture, std::ptrdiff_t longest) {
  const std::ptrdiff_t side = std::max(picture.rows, picture.columns);
  if (side <= longest) return picture;
  const auto scaled = [&](std::ptrdiff_t length) { return std::max<std::ptrdiff_t>(1, length * longest / side); };
  ReportPicture small{scaled(picture.rows), scaled(picture.columns), {}};
  small.pixels.reserve(static_cast<std::size_t>(small.rows * small.columns));
  for (std::ptrdiff_t y = 0; y < small.rows; ++y) {
    for (std::ptrdiff_t x = 0; x < small.columns; ++x) {
      double sum = 0;
      std::size_t count = 0;
      for (std::ptrdiff_t v = y * picture.rows / small.rows; v < (y + 1) * picture.rows / small.rows; ++v) {
        for (std::ptrdiff_t u = x * picture.columns / small.columns; u < (x + 1) * picture.columns / small.columns;
             ++u) {
          const float value = picture.pixels[static_cast<std::size_t>(v * picture.columns + u)];
          if (!std::isfinite(value)) continue;
          sum += static_cast<double>(value);
          ++count;
        }
      }
      small.pixels.push_back(count > 0 ? static_cast<float>(sum / static_cast<double>(count)) : std::nanf(""));
    }
  }
  return small;
}

std::vector<std::uint8_t> grey_levels(const ReportPicture& picture, const GreyRange& range) {
  const double width = range.high - range.low;
  std::vector<std::uint8_t> levels;
  levels.reserve(picture.pixels.size());
  for (const float value : picture.pixels) {
    const double share = (static_cast<double>(value) - range.low) / width;
    const bool drawn = std::isfinite(value) && width > 0;
    levels.push_back(drawn ? static_cast<std::uint8_t>(std::lround(255 * std::clamp(share, 0.0, 1.0))) : 128);
  }
  return levels;
}

std::string data_uri(const ReportPicture& picture, const GreyRange& range) {
  const ReportPicture small = reduced(picture, kLongestSide);
  const std::vector<std::uint8_t> levels = grey_levels(small, range);
  return "data:image/png;base64," + base64(encode_png({levels.data(), small.rows, small.columns}, 1));
}

std::string picture_html(const ReportPicture& picture, const GreyRange& range, std::string_view alt) {
  if (picture.pixels.empty()) return "<span class=\"blank\">no picture</span>";
  return fmt::format("<img alt=\"{}\" width=\"{}\" height=\"{}\" src=\"{}\">", escaped(alt), picture.columns,
                     picture.rows, data_uri(picture, range));
}

std::string overlaid_html(const ReportPicture& picture, const Overlay& overlay, std::string_view alt) {
  if (picture.pixels.empty()) return "<span class=\"blank\">no picture</span>";
  const std::ptrdiff_t rows = overlay.rows > 0 ? overlay.rows : picture.rows;
  const std::ptrdiff_t columns = overlay.columns > 0 ? overlay.columns : picture.columns;
  std::string html = fmt::format(
      "<svg viewBox=\"-0.5 -0.5 {1} {2}\" role=\"img\" aria-label=\"{0}\"><image x=\"-0.5\" y=\"-0.5\" width=\"{1}\" "
      "height=\"{2}\" preserveAspectRatio=\"none\" href=\"{3}\"/>",
      escaped(alt), columns, rows, data_uri(picture, robust_range(picture)));
  const auto [x, y] = overlay.centre;
  if (std::isfinite(x) && std::isfinite(y) && std::isfinite(overlay.radius) && overlay.radius > 0) {
    const double arm = 0.18 * overlay.radius;
    const std::string cross =
        fmt::format("M{:.3f} {:.3f}H{:.3f}M{:.3f} {:.3f}V{:.3f}", x - arm, y, x + arm, x, y - arm, y + arm);
    // Every line twice: a dark one under a bright one shows on any grey.
    for (const char* layer : {"under", "over"})
      html += fmt::format("<g class=\"{}\"><circle cx=\"{:.3f}\" cy=\"{:.3f}\" r=\"{:.3f}\"/><path d=\"{}\"/></g>",
                          layer, x, y, overlay.radius, cross);
  }
  return html + "</svg>";
}

void check_picture(const ReportPicture& picture, const std::string& name) {
  const bool fits =
      picture.rows >= 0 && picture.columns >= 0 &&
      picture.pixels.size() == static_cast<std::size_t>(picture.rows) * static_cast<std::size_t>(picture.columns);
  require(fits, ("number of pixels of " + name).c_str(), picture.pixels.size(),
          fmt::format("rows x columns = {} x {}", picture.rows, picture.columns));
}

}  // namespace tambour::report
