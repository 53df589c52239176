// Units of length that files and people write.
#pragma once

#include <optional>
#include <string>
#include <string_view>

#include "tambour/image_source.hpp"

namespace tambour {

/// "nm", "nanometers" … become "nanometre" and so on; what is not known as a length stays as it is.
std::string unit_name(std::string_view unit);

/// The size in another unit of length; nothing when either unit is not one.
std::optional<double> convert_length(const PixelSize& size, std::string_view unit);

/// Rounded to the seven decimal digits that a 32-bit float carries, so that 1.35 comes back as 1.35.
double rounded_to_float_digits(double value);

/// A number at the beginning of `text` in the notation of C, whatever the locale; nothing if there is none.
std::optional<double> leading_number(std::string_view text);
/// The same for text that is nothing but a number, "nan", "inf" and a plus sign included.
std::optional<double> whole_number(std::string_view text);

}  // namespace tambour
