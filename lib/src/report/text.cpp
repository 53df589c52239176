#include "report/text.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

namespace tambour::report {
namespace {

constexpr std::string_view kReplacement = "\xEF\xBF\xBD";
constexpr std::string_view kDash = "\xE2\x80\x93";
constexpr std::string_view kNarrowSpace = "\xE2\x80\xAF";

// Length of the UTF-8 sequence that starts at `at`, 0 if it is none. Overlong forms, surrogates and values above
// U+10FFFF are none.
std::size_t sequence_length(std::string_view text, std::size_t at) {
  const auto byte = [&](std::size_t i) { return static_cast<unsigned char>(text[i]); };
  const unsigned first = byte(at);
  if (first < 0x80) return 1;
  if (first < 0xC2 || first > 0xF4) return 0;
  const std::size_t length = first < 0xE0 ? 2 : first < 0xF0 ? 3 : 4;
  if (at + length > text.size()) return 0;
  for (std::size_t i = 1; i < length; ++i)
    if ((byte(at + i) & 0xC0) != 0x80) return 0;
  const unsigned second = byte(at + 1);
  const bool wrong = (first == 0xE0 && second < 0xA0) || (first == 0xED && second > 0x9F) ||
                     (first == 0xF0 && second < 0x90) || (first == 0xF4 && second > 0x8F);
  return wrong ? 0 : length;
}

std::string_view unit_symbol(const std::string& unit) {
  if (unit == "angstrom") return "Å";
  if (unit == "nanometre") return "nm";
  if (unit == "micrometre") return "µm";
  return unit;
}

}  // namespace

std::string escaped(std::string_view text) {
  std::string out;
  out.reserve(text.size() + text.size() / 8);
  for (std::size_t at = 0; at < text.size();) {
    const std::size_t length = sequence_length(text, at);
    const char c = text[at];
    if (length == 0 || (static_cast<unsigned char>(c) < 0x20 && c != '\n' && c != '\t') || c == 0x7F) {
      out += kReplacement;
      ++at;
      continue;
    }
    switch (c) {
      case '&':
        out += "&amp;";
        break;
      case '<':
        out += "&lt;";
        break;
      case '>':
        out += "&gt;";
        break;
      case '"':
        out += "&quot;";
        break;
      case '\'':
        out += "&#39;";
        break;
      default:
        out += text.substr(at, length);
    }
    at += length;
  }
  return out;
}

std::string script_safe(std::string json) {
  for (std::size_t at = json.find('<'); at != std::string::npos; at = json.find('<', at))
    json.replace(at, 1, "\\u003c");
  return json;
}

std::string count_text(std::size_t count) {
  std::string digits = std::to_string(count);
  if (digits.size() < 5) return digits;
  for (std::size_t at = digits.size() - 3; at<digits.size(); at = at> 3 ? at - 3 : digits.size())
    digits.insert(at, kNarrowSpace);
  return digits;
}

std::string number_text(double value, int digits) {
  return std::isfinite(value) ? fmt::format("{:.{}g}", value == 0 ? 0.0 : value, digits) : std::string(kDash);
}

std::string fixed_text(double value, int decimals) {
  return std::isfinite(value) ? fmt::format("{:.{}f}", value == 0 ? 0.0 : value, decimals) : std::string(kDash);
}

std::string share_text(double part, double whole) {
  if (!std::isfinite(part) || !(whole > 0)) return std::string(kDash);
  return fmt::format("{:.1f}{}%", 100 * part / whole, kNarrowSpace);
}

std::string physical_text(double pixels, const PixelSize& size) {
  if (!size.known() || !std::isfinite(pixels)) return "not known";
  return fmt::format("{} {}", number_text(pixels * size.value), escaped(unit_symbol(size.unit)));
}

std::string length_text(double pixels, const PixelSize& size) {
  const std::string text = number_text(pixels) + " px";
  return size.known() && std::isfinite(pixels) ? fmt::format("{} ({})", text, physical_text(pixels, size)) : text;
}

std::string verdict_text(std::string_view verdict, int fold) {
  std::string words(verdict);
  std::replace(words.begin(), words.end(), '_', ' ');
  words = escaped(words);
  return fold > 0 ? fmt::format("{}-fold, {}", fold, words) : words;
}

std::string images_text(std::size_t count) { return count_text(count) + (count == 1 ? " image" : " images"); }

std::string base64(std::span<const std::uint8_t> bytes) {
  constexpr std::string_view alphabet = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
  std::string out;
  out.reserve((bytes.size() + 2) / 3 * 4);
  for (std::size_t at = 0; at < bytes.size(); at += 3) {
    const std::size_t have = std::min<std::size_t>(3, bytes.size() - at);
    std::uint32_t group = 0;
    for (std::size_t i = 0; i < 3; ++i) group = (group << 8) | (i < have ? bytes[at + i] : 0U);
    for (std::size_t i = 0; i < 4; ++i) out += i <= have ? alphabet[(group >> (18 - 6 * i)) & 63U] : '=';
  }
  return out;
}

}  // namespace tambour::report
