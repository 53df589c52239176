// Numbers and names as text that is safe inside HTML.
#pragma once

#include <cstddef>
#include <cstdint>
#include <span>
#include <string>
#include <string_view>

#include "tambour/image_source.hpp"

namespace tambour::report {

/// Text for element content and for quoted attributes: & < > " ' become entities; bytes that are not UTF-8 (file names
/// may hold any) and control characters become U+FFFD.
std::string escaped(std::string_view text);

/// JSON that stands inside a script element: every '<' becomes \u003c, so that no name can close the element.
std::string script_safe(std::string json);

/// "12 345" with narrow no-break spaces from five digits on.
std::string count_text(std::size_t count);

/// Significant digits; an en dash when the value is not finite.
std::string number_text(double value, int digits = 4);

/// Fixed decimals; an en dash when the value is not finite.
std::string fixed_text(double value, int decimals);

/// "45.3 %"; an en dash when there is no whole.
std::string share_text(double part, double whole);

/// "40 px (54 Å)"; without the bracket when the pixel size is not known.
std::string length_text(double pixels, const PixelSize& size);

/// "75.6 Å"; "not known" without a pixel size.
std::string physical_text(double pixels, const PixelSize& size);

/// "5-fold, best supported", "inconclusive", …
std::string verdict_text(std::string_view verdict, int fold);

/// "1 image", "12 images".
std::string images_text(std::size_t count);

std::string base64(std::span<const std::uint8_t> bytes);

}  // namespace tambour::report
