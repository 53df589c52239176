#include <fmt/format.h>

#include <array>
#include <cmath>
#include <string_view>

#include "files/tiff_page.hpp"
#include "files/units.hpp"

namespace tambour {
namespace {

// The value of `key` in text such as `key="value"` or `key=value`, up to one of the stops.
std::string_view value_after(std::string_view text, std::string_view key, std::string_view stops) {
  const auto place = text.find(key);
  if (place == std::string_view::npos) return {};
  text.remove_prefix(place + key.size());
  return text.substr(0, text.find_first_of(stops));
}

// <Pixels ... PhysicalSizeX="0.1" PhysicalSizeXUnit="µm" ...>; the unit is a micrometre unless told. Source: OME-XML
// schema.
PixelSize from_ome(std::string_view description) {
  const auto begin = description.find("<Pixels");
  if (begin == std::string_view::npos) return {};
  const auto element = description.substr(begin, description.find('>', begin) - begin);
  const auto value = leading_number(value_after(element, " PhysicalSizeX=\"", "\""));
  const auto unit = value_after(element, " PhysicalSizeXUnit=\"", "\"");
  if (!value || !(*value > 0)) return {};
  return {*value, unit.empty() ? "micrometre" : unit_name(unit)};
}

// What TiffWriter notes, since the resolution tags know inches and centimetres only.
PixelSize from_own_note(std::string_view description) {
  const auto value = leading_number(value_after(description, "pixel_size=", "\n"));
  if (!value || !(*value > 0)) return {};
  return {*value, std::string(value_after(description, "unit=", "\n"))};
}

std::optional<double> pixels_per_unit(TIFF* tiff, std::uint32_t tag) {
  float value = 0;
  if (TIFFGetField(tiff, tag, &value) != 1 || !std::isfinite(value) || !(value > 0)) return std::nullopt;
  return value;
}

}  // namespace

PixelSize tiff_pixel_size(TIFF* tiff, std::string& remark) {
  remark.clear();
  const std::string description = tiff_text(tiff, TIFFTAG_IMAGEDESCRIPTION);
  if (description.starts_with("tambour\n")) return from_own_note(description);
  if (const PixelSize size = from_ome(description); size.known()) return size;

  const auto across = pixels_per_unit(tiff, TIFFTAG_XRESOLUTION);
  if (!across) return {};
  const auto down = pixels_per_unit(tiff, TIFFTAG_YRESOLUTION);
  if (down && std::abs(*down - *across) > 1e-5 * *across)
    remark = fmt::format("pixels are not square ({} and {} to the unit); the width is taken as the pixel size", *across,
                         *down);
  // ImageJ gives pixels per unit in the tag and the unit in its description.
  if (description.starts_with("ImageJ=")) {
    const std::string unit = unit_name(value_after(description, "\nunit=", "\r\n"));
    if (unit.empty() || unit == "pixel" || unit == "inch") return {};
    return {rounded_to_float_digits(1 / *across), unit};
  }
  std::uint16_t unit = RESUNIT_INCH;
  TIFFGetFieldDefaulted(tiff, TIFFTAG_RESOLUTIONUNIT, &unit);
  if (unit != RESUNIT_INCH && unit != RESUNIT_CENTIMETER) return {};
  constexpr std::array print_defaults = {72.0, 75.0, 96.0, 100.0, 150.0, 200.0, 300.0, 600.0};
  for (const double usual : print_defaults)
    if (unit == RESUNIT_INCH && *across == usual)
      remark = fmt::format(
          "the resolution of {} pixels an inch is a usual setting for print; the pixel size may be wrong", usual);
  return {rounded_to_float_digits((unit == RESUNIT_INCH ? 25400.0 : 10000.0) / *across), "micrometre"};
}

}  // namespace tambour
