#include "files/units.hpp"

#include <fmt/format.h>

#include <charconv>
#include <cmath>

namespace tambour {
namespace {

struct Spelling {
  std::string_view text;
  std::string_view name;
};

// Micro is written with U+00B5 or U+03BC, and by some programs as a six-character escape.
constexpr Spelling spellings[] = {
    {"A", "angstrom"},
    {"\u00C5", "angstrom"},
    {"\u212B", "angstrom"},
    {"ang", "angstrom"},
    {"angstrom", "angstrom"},
    {"angstroms", "angstrom"},
    {"Angstrom", "angstrom"},
    {"pm", "picometre"},
    {"picometre", "picometre"},
    {"picometer", "picometre"},
    {"nm", "nanometre"},
    {"nanometre", "nanometre"},
    {"nanometres", "nanometre"},
    {"nanometer", "nanometre"},
    {"nanometers", "nanometre"},
    {"um", "micrometre"},
    {"\u00B5m", "micrometre"},
    {"\u03BCm", "micrometre"},
    {"\\u00B5m", "micrometre"},
    {"micron", "micrometre"},
    {"microns", "micrometre"},
    {"micrometre", "micrometre"},
    {"micrometres", "micrometre"},
    {"micrometer", "micrometre"},
    {"micrometers", "micrometre"},
    {"mm", "millimetre"},
    {"millimetre", "millimetre"},
    {"millimeter", "millimetre"},
    {"cm", "centimetre"},
    {"centimetre", "centimetre"},
    {"centimeter", "centimetre"},
    {"inch", "inch"},
    {"in", "inch"},
    {"m", "metre"},
    {"metre", "metre"},
    {"meter", "metre"},
};

struct Length {
  std::string_view name;
  double per_metre;
};

constexpr Length lengths[] = {{"angstrom", 1e10},  {"picometre", 1e12}, {"nanometre", 1e9}, {"micrometre", 1e6},
                              {"millimetre", 1e3}, {"centimetre", 1e2}, {"metre", 1},       {"inch", 1 / 0.0254}};

std::optional<double> units_per_metre(std::string_view unit) {
  const std::string name = unit_name(unit);
  for (const auto& length : lengths)
    if (length.name == name) return length.per_metre;
  return std::nullopt;
}

}  // namespace

std::string unit_name(std::string_view unit) {
  for (const auto& spelling : spellings)
    if (spelling.text == unit) return std::string(spelling.name);
  return std::string(unit);
}

std::optional<double> convert_length(const PixelSize& size, std::string_view unit) {
  const auto from = units_per_metre(size.unit);
  const auto to = units_per_metre(unit);
  if (!from || !to) return std::nullopt;
  if (*from == *to) return size.value;
  // The factor is a power of ten (or an inch): dividing in this order keeps it exact.
  return *to >= *from ? size.value * (*to / *from) : size.value / (*from / *to);
}

double rounded_to_float_digits(double value) {
  if (!std::isfinite(value)) return value;
  return leading_number(fmt::format("{:.7g}", value)).value_or(value);
}

namespace {
std::optional<double> parse(std::string_view text, bool whole) {
  if (text.size() > 1 && text[0] == '+' && text[1] != '-') text.remove_prefix(1);
  double value = 0;
  const auto [behind, failure] = std::from_chars(text.data(), text.data() + text.size(), value);
  if (failure != std::errc{} || (whole && behind != text.data() + text.size())) return std::nullopt;
  return value;
}
}  // namespace

std::optional<double> leading_number(std::string_view text) { return parse(text, false); }

std::optional<double> whole_number(std::string_view text) { return parse(text, true); }

}  // namespace tambour
