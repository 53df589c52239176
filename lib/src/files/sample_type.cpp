#include "files/sample_type.hpp"

#include <cmath>
#include <cstdint>
#include <limits>

#include "files/byte_order.hpp"

namespace tambour {
namespace {

// IEEE 754 binary16: sign, 5 bits of exponent, 10 of fraction.
double half_to_double(std::uint16_t bits) {
  const int exponent = (bits >> 10) & 31;
  const int fraction = bits & 1023;
  double magnitude;
  if (exponent == 31)
    magnitude = fraction == 0 ? std::numeric_limits<double>::infinity() : std::numeric_limits<double>::quiet_NaN();
  else
    magnitude = exponent == 0 ? std::ldexp(fraction, -24) : std::ldexp(1024 + fraction, exponent - 25);
  return (bits & 0x8000) != 0 ? -magnitude : magnitude;
}

template <class T, bool big_endian>
void decode_as(const std::byte* from, std::size_t stride, std::size_t count, double* out) {
  for (std::size_t i = 0; i < count; ++i) out[i] = static_cast<double>(load<T>(from + i * stride, big_endian));
}

template <class T>
void decode(bool big_endian, const std::byte* from, std::size_t stride, std::size_t count, double* out) {
  if (big_endian)
    decode_as<T, true>(from, stride, count, out);
  else
    decode_as<T, false>(from, stride, count, out);
}

}  // namespace

std::size_t sample_bytes(SampleType type) noexcept {
  switch (type) {
    case SampleType::u1:
    case SampleType::i1:
      return 1;
    case SampleType::u2:
    case SampleType::i2:
    case SampleType::f2:
      return 2;
    case SampleType::u4:
    case SampleType::i4:
    case SampleType::f4:
      return 4;
    default:
      return 8;
  }
}

std::optional<SampleType> sample_type(char kind, std::size_t bytes) noexcept {
  using enum SampleType;
  constexpr struct {
    char kind;
    std::size_t bytes;
    SampleType type;
  } known[] = {{'u', 1, u1}, {'u', 2, u2}, {'u', 4, u4}, {'u', 8, u8}, {'i', 1, i1}, {'i', 2, i2},
               {'i', 4, i4}, {'i', 8, i8}, {'f', 2, f2}, {'f', 4, f4}, {'f', 8, f8}};
  for (const auto& entry : known)
    if (entry.kind == kind && entry.bytes == bytes) return entry.type;
  return std::nullopt;
}

void decode_samples(SampleFormat format, const std::byte* from, std::size_t stride, std::size_t count, double* out) {
  const bool big = format.big_endian;
  switch (format.type) {
    case SampleType::u1:
      return decode<std::uint8_t>(big, from, stride, count, out);
    case SampleType::i1:
      return decode<std::int8_t>(big, from, stride, count, out);
    case SampleType::u2:
      return decode<std::uint16_t>(big, from, stride, count, out);
    case SampleType::i2:
      return decode<std::int16_t>(big, from, stride, count, out);
    case SampleType::u4:
      return decode<std::uint32_t>(big, from, stride, count, out);
    case SampleType::i4:
      return decode<std::int32_t>(big, from, stride, count, out);
    case SampleType::u8:
      return decode<std::uint64_t>(big, from, stride, count, out);
    case SampleType::i8:
      return decode<std::int64_t>(big, from, stride, count, out);
    case SampleType::f4:
      return decode<float>(big, from, stride, count, out);
    case SampleType::f8:
      return decode<double>(big, from, stride, count, out);
    case SampleType::f2:
      for (std::size_t i = 0; i < count; ++i) out[i] = half_to_double(load<std::uint16_t>(from + i * stride, big));
      return;
  }
}

}  // namespace tambour
