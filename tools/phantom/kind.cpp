#include "phantom/kind.hpp"

#include <fmt/format.h>

#include "common/parse.hpp"
#include "tambour/error.hpp"

namespace tambour::tools::phantom {
namespace {

struct Known {
  const char* name;
  Shape shape;
  bool needs_count;
  int usual_count;
};

constexpr Known known[] = {{"ring", Shape::ring, true, 0},           {"broken", Shape::broken, true, 0},
                           {"scattered", Shape::scattered, true, 0}, {"blobs", Shape::blobs, false, 12},
                           {"field", Shape::field, false, 0},        {"noise", Shape::noise, false, 0}};

constexpr int most_subunits = 200;

[[noreturn]] void refuse(const std::string& part, const std::string& allowed) {
  throw Error(ErrorCode::invalid_argument, fmt::format("--mix has '{}'; allowed is {}", part, allowed), part, allowed);
}

Kind parse_kind(const std::string& part) {
  const auto sides = split(part, '=');
  const auto words = split(sides.front(), ':');
  const Known* found = nullptr;
  for (const auto& candidate : known)
    if (words.front() == candidate.name) found = &candidate;
  if (found == nullptr || sides.size() > 2 || words.size() > 2)
    refuse(part, "KIND[:N][=SHARE] with KIND one of ring:N, broken:N, scattered:N, blobs[:N], field, noise");

  Kind kind{sides.front(), found->shape, found->usual_count, 1};
  const bool takes_count = found->needs_count || found->usual_count > 0;
  if (words.size() == 2) {
    const auto count = parse_integer("--mix " + part, words[1]);
    if (!takes_count || count < 2 || count > most_subunits)
      refuse(part, takes_count ? fmt::format("2 to {} subunits", most_subunits) : "this kind without a number");
    kind.subunits = static_cast<int>(count);
  } else if (found->needs_count) {
    refuse(part, fmt::format("{0}:N, such as {0}:12", found->name));
  }
  if (sides.size() == 2) kind.share = parse_number("--mix " + part, sides[1]);
  if (!(kind.share >= 0)) refuse(part, "a share of 0 or more");
  return kind;
}

}  // namespace

std::vector<Kind> parse_mix(const std::string& text) {
  std::vector<Kind> mix;
  double sum = 0;
  for (const auto& part : split(text, ',')) {
    mix.push_back(parse_kind(part));
    sum += mix.back().share;
  }
  if (!(sum > 0)) refuse(text, "shares that do not sum to 0");
  for (auto& kind : mix) kind.share /= sum;
  return mix;
}

}  // namespace tambour::tools::phantom
