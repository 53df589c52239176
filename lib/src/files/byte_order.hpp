// Numbers in a given byte order, made from and into bytes by shifts: right on hosts of either order.
#pragma once

#include <bit>
#include <concepts>
#include <cstddef>
#include <cstdint>
#include <type_traits>

namespace tambour {

constexpr bool host_is_big_endian = std::endian::native == std::endian::big;

namespace detail {
template <std::size_t bytes>
struct UnsignedOf;
template <>
struct UnsignedOf<1> {
  using type = std::uint8_t;
};
template <>
struct UnsignedOf<2> {
  using type = std::uint16_t;
};
template <>
struct UnsignedOf<4> {
  using type = std::uint32_t;
};
template <>
struct UnsignedOf<8> {
  using type = std::uint64_t;
};
}  // namespace detail

/// The number whose bytes begin at `from`.
template <class T>
requires std::is_arithmetic_v<T> T load(const std::byte* from, bool big_endian) {
  using Bits = typename detail::UnsignedOf<sizeof(T)>::type;
  Bits bits = 0;
  for (std::size_t i = 0; i < sizeof(T); ++i) {
    const auto byte = std::to_integer<Bits>(from[big_endian ? sizeof(T) - 1 - i : i]);
    bits = static_cast<Bits>(bits | static_cast<Bits>(byte << (8 * i)));
  }
  return std::bit_cast<T>(bits);
}

/// Writes the bytes of `value` to `to`.
template <class T>
requires std::is_arithmetic_v<T>
void store(std::byte* to, T value, bool big_endian) {
  using Bits = typename detail::UnsignedOf<sizeof(T)>::type;
  const auto bits = std::bit_cast<Bits>(value);
  for (std::size_t i = 0; i < sizeof(T); ++i)
    to[big_endian ? sizeof(T) - 1 - i : i] = static_cast<std::byte>((bits >> (8 * i)) & 0xFF);
}

}  // namespace tambour
