#include "common/parse.hpp"

#include <fmt/format.h>

#include <charconv>
#include <cmath>
#include <limits>
#include <string_view>

#include "tambour/error.hpp"

namespace tambour::tools {
namespace {

[[noreturn]] void refuse(const std::string& what, const std::string& text, const std::string& allowed) {
  throw Error(ErrorCode::invalid_argument, fmt::format("{} is '{}'; allowed is {}", what, text, allowed), text,
              allowed);
}

template <class Number>
bool read_whole(std::string_view text, Number& number) {
  if (text.size() > 1 && text.front() == '+' && text[1] != '-') text.remove_prefix(1);
  const auto [end, problem] = std::from_chars(text.data(), text.data() + text.size(), number);
  return problem == std::errc() && end == text.data() + text.size();
}

}  // namespace

double parse_number(const std::string& what, const std::string& text) {
  double number = 0;
  if (!read_whole(text, number) || !std::isfinite(number)) refuse(what, text, "a finite number");
  return number;
}

std::int64_t parse_integer(const std::string& what, const std::string& text) {
  std::int64_t number = 0;
  if (!read_whole(text, number)) refuse(what, text, "a whole number");
  return number;
}

std::pair<int, int> parse_range(const std::string& what, const std::string& text) {
  const auto parts = split(text, ':');
  constexpr std::int64_t limit = std::numeric_limits<int>::max();
  std::int64_t first = 0;
  std::int64_t last = 0;
  const bool fine = (parts.size() == 1 || parts.size() == 2) && read_whole(parts.front(), first) &&
                    read_whole(parts.back(), last) && -limit <= first && first <= limit && -limit <= last &&
                    last <= limit;
  if (!fine) refuse(what, text, "FIRST:LAST, two whole numbers such as 2:24");
  return {static_cast<int>(first), static_cast<int>(last)};
}

std::pair<double, double> parse_pair(const std::string& what, const std::string& text) {
  const auto parts = split(text, ',');
  double x = 0;
  double y = 0;
  const bool fine =
      parts.size() == 2 && read_whole(parts[0], x) && read_whole(parts[1], y) && std::isfinite(x) && std::isfinite(y);
  if (!fine) refuse(what, text, "X,Y, two numbers in pixels such as 31.5,32");
  return {x, y};
}

std::vector<std::string> split(const std::string& text, char separator) {
  std::vector<std::string> parts(1);
  for (const char c : text) {
    if (c == separator)
      parts.emplace_back();
    else
      parts.back() += c;
  }
  for (auto& part : parts) {
    const auto first = part.find_first_not_of(' ');
    part = first == std::string::npos ? "" : part.substr(first, part.find_last_not_of(' ') - first + 1);
  }
  return parts;
}

void refuse_if_any(const std::vector<std::string>& problems) {
  if (!problems.empty()) throw Error(ErrorCode::invalid_argument, fmt::format("{}", fmt::join(problems, "; ")));
}

std::string shell_quote(const std::string& word) {
  constexpr std::string_view harmless = "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789_@%+=:,./-";
  if (!word.empty() && word.find_first_not_of(harmless) == std::string::npos) return word;
  std::string quoted = "'";
  for (const char c : word) quoted += c == '\'' ? std::string("'\\''") : std::string(1, c);
  return quoted + "'";
}

}  // namespace tambour::tools
