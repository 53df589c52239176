// Grey pictures of the page: from numbers to PNG inside the page.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "tambour/report.hpp"

namespace tambour::report {

/// Values that are drawn black and white.
struct GreyRange {
  double low = 0;
  double high = 1;
};

/// From the 0.5th to the 99.5th percentile of the finite pixels, so that single hot pixels do not darken the rest.
GreyRange robust_range(const ReportPicture& picture);

/// The range of the same width about zero: what is mid-grey in it is nothing.
GreyRange about_zero(const GreyRange& range);

/// Mean over areas, so that neither side is longer than `longest`; unchanged if it is not. Non-finite pixels are left
/// out of the means.
ReportPicture reduced(const ReportPicture& picture, std::ptrdiff_t longest);

/// 0 .. 255, clipped; non-finite pixels and pictures of one value are mid-grey.
std::vector<std::uint8_t> grey_levels(const ReportPicture& picture, const GreyRange& range);

/// "data:image/png;base64,…" of the picture, reduced to 256 pixels at most.
std::string data_uri(const ReportPicture& picture, const GreyRange& range);

/// The picture as an img element, or a box that says that there is none.
std::string picture_html(const ReportPicture& picture, const GreyRange& range, std::string_view alt);

/// The centre and radius that are drawn over a picture, in pixels of the whole frame.
struct Overlay {
  Centre centre;
  double radius = 0;
  std::ptrdiff_t rows = 0;  ///< of the frame, which the picture covers whatever its own size
  std::ptrdiff_t columns = 0;
};

/// The picture under a vector drawing of its centre and disk, which stays sharp at any size.
std::string overlaid_html(const ReportPicture& picture, const Overlay& overlay, std::string_view alt);

/// Throws Error(invalid_argument) unless the picture has rows x columns pixels. `name` says which it is.
void check_picture(const ReportPicture& picture, const std::string& name);

}  // namespace tambour::report
