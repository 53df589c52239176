// The kinds of numbers that pixels are stored as.
#pragma once

#include <cstddef>
#include <optional>

namespace tambour {

enum class SampleType { u1, i1, u2, i2, u4, i4, u8, i8, f2, f4, f8 };

struct SampleFormat {
  SampleType type = SampleType::u1;
  bool big_endian = false;
};

std::size_t sample_bytes(SampleType type) noexcept;

/// The type of a kind ('u', 'i' or 'f') with that many bytes, if there is one.
std::optional<SampleType> sample_type(char kind, std::size_t bytes) noexcept;

/// Decodes `count` numbers that lie `stride` bytes apart into out[0 .. count-1]. Integers of 64 bits are rounded to
/// double.
void decode_samples(SampleFormat format, const std::byte* from, std::size_t stride, std::size_t count, double* out);

}  // namespace tambour
