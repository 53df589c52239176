// Numbers in a given byte order, on hosts of either order.
#pragma once

#include <bit>
#include <cstddef>
#include <cstdint>
#include <cstring>
#include <type_traits>

namespace tambour {

constexpr bool host_is_big_endian = std::endian::native == std::endian::big;

namespace detail {

template <std::size_t bytes>
using UnsignedOf = std::conditional_t<
    bytes == 1, std::uint8_t,
    std::conditional_t<bytes == 2, std::uint16_t, std::conditional_t<bytes == 4, std::uint32_t, std::uint64_t>>>;

// Written as shifts of halves, which compilers turn into one instruction.
template <class Bits>
constexpr Bits reversed(Bits bits) {
  if constexpr (sizeof(Bits) == 1) {
    return bits;
  } else {
    using Half = UnsignedOf<sizeof(Bits) / 2>;
    constexpr int half_bits = 4 * sizeof(Bits);
    const Bits high = reversed(static_cast<Half>(bits)), low = reversed(static_cast<Half>(bits >> half_bits));
    return static_cast<Bits>(high << half_bits | low);
  }
}

}  // namespace detail

/// The number whose bytes begin at `from`, which need not be aligned.
template <class T>
requires std::is_arithmetic_v<T> T load(const std::byte* from, bool big_endian) {
  detail::UnsignedOf<sizeof(T)> bits;
  std::memcpy(&bits, from, sizeof(T));
  return std::bit_cast<T>(big_endian == host_is_big_endian ? bits : detail::reversed(bits));
}

/// Writes the bytes of `value` to `to`.
template <class T>
requires std::is_arithmetic_v<T>
void store(std::byte* to, T value, bool big_endian) {
  auto bits = std::bit_cast<detail::UnsignedOf<sizeof(T)>>(value);
  if (big_endian != host_is_big_endian) bits = detail::reversed(bits);
  std::memcpy(to, &bits, sizeof(T));
}

}  // namespace tambour
