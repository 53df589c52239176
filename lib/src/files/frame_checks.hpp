// Checks that all formats share: sizes against the file's length, and which samples make a pixel's value.
#pragma once

#include <cstddef>
#include <cstdint>
#include <initializer_list>
#include <optional>
#include <string>
#include <vector>

#include "tambour/files.hpp"

namespace tambour {

/// Product of sizes; nothing when it does not fit into 63 bits.
std::optional<std::uint64_t> product(std::initializer_list<std::uint64_t> factors) noexcept;

/// Largest number of decoded bytes that a stored byte can stand for: DEFLATE at its best (1032, RFC 1951).
constexpr std::uint64_t deflate_expansion = 1032;
/// The same for any other compression; a file that claims more is taken for a lie, not for an allocation.
constexpr std::uint64_t any_expansion = 20000;

/// Throws Error(bad_input) when decoded bytes cannot come from `stored` bytes.
void check_expansion(const std::string& path, std::optional<std::uint64_t> decoded, std::uint64_t stored,
                     std::uint64_t expansion);

/// One sample of a pixel and its share in the pixel's value.
struct SampleWeight {
  int sample = 0;
  double weight = 1;
};

/// How the samples of a pixel are named.
enum class PixelKind { grey, colour, channels };

/// The samples to be read and the remark that this deserves (empty: none). `samples` counts alpha, too.
/// Throws Error(bad_input) when the channel asked for does not exist, or when there are several channels without names
/// and none was asked for.
std::vector<SampleWeight> choose_samples(const std::string& path, int samples, PixelKind kind,
                                         std::optional<int> channel, std::string& remark);

}  // namespace tambour
