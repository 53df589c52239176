#include "files/frame_checks.hpp"

#include "files/refuse.hpp"

namespace tambour {

std::optional<std::uint64_t> product(std::initializer_list<std::uint64_t> factors) noexcept {
  std::uint64_t result = 1;
  for (const auto factor : factors) {
    if (factor != 0 && result > (std::uint64_t{1} << 62) / factor) return std::nullopt;
    result *= factor;
  }
  return result;
}

void check_expansion(const std::string& path, std::optional<std::uint64_t> decoded, std::uint64_t stored,
                     std::uint64_t expansion) {
  // Small pictures are let through whatever they claim: some codecs need next to nothing for a constant one.
  constexpr std::uint64_t harmless = 1 << 20;
  if (decoded && (*decoded <= harmless || *decoded / expansion <= stored)) return;
  refuse_input("{}: the header tells images of {} bytes, which {} stored bytes cannot hold", path,
               decoded ? std::to_string(*decoded) : "more than 2^62", stored);
}

std::vector<SampleWeight> choose_samples(const std::string& path, int samples, PixelKind kind,
                                         std::optional<int> channel, std::string& remark) {
  remark.clear();
  if (channel) {
    if (*channel >= samples)
      refuse_input("{}: has {} channel{} a pixel, channel {} was asked for; allowed is 0 to {}", path, samples,
                   samples == 1 ? "" : "s", *channel, samples - 1);
    if (samples > 1) remark = fmt::format("{} channels a pixel, channel {} read", samples, *channel);
    return {{*channel, 1}};
  }
  if (kind == PixelKind::channels && samples > 1)
    refuse_input("{}: has {} channels a pixel that are not red, green and blue; choose one with a channel from 0 to {}",
                 path, samples, samples - 1);
  if (kind == PixelKind::colour) {
    remark = "colour, read as luma (0.299 red + 0.587 green + 0.114 blue)";
    if (samples > 3) remark += ", alpha ignored";
    return {{0, 0.299}, {1, 0.587}, {2, 0.114}};
  }
  if (samples > 1) remark = "grey with alpha, alpha ignored";
  return {{0, 1}};
}

}  // namespace tambour
