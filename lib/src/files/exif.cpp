#include "files/exif.hpp"

#include <cstdint>

#include "files/byte_order.hpp"

namespace tambour {

int exif_orientation(std::span<const std::byte> block) {
  constexpr std::uint16_t orientation_tag = 274;
  constexpr std::size_t entry_bytes = 12;
  if (block.size() < 8) return 1;
  const bool big = block[0] == std::byte{'M'};
  const std::size_t directory = load<std::uint32_t>(block.data() + 4, big);
  if (directory + 2 > block.size()) return 1;
  const std::size_t entries = load<std::uint16_t>(block.data() + directory, big);
  for (std::size_t i = 0; i < entries; ++i) {
    const std::size_t entry = directory + 2 + i * entry_bytes;
    if (entry + entry_bytes > block.size()) return 1;
    if (load<std::uint16_t>(block.data() + entry, big) != orientation_tag) continue;
    const int value = load<std::uint16_t>(block.data() + entry + 8, big);
    return value >= 1 && value <= 8 ? value : 1;
  }
  return 1;
}

}  // namespace tambour
