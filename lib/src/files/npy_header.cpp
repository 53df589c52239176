#include "files/npy_header.hpp"

#include <fmt/format.h>

#include "files/byte_order.hpp"

namespace tambour {

std::string npy_header(PixelType type, const std::vector<std::size_t>& shape) {
  std::string dictionary =
      fmt::format("{{'descr': '{}f{}', 'fortran_order': False, 'shape': ({}), }}", host_is_big_endian ? '>' : '<',
                  type == PixelType::float32 ? 4 : 8, fmt::join(shape, ", "));
  // Spaces and a newline bring the numbers to a multiple of 64 bytes.
  constexpr std::size_t before = 10, alignment = 64;
  const std::size_t whole = (before + dictionary.size() + 1 + alignment - 1) / alignment * alignment;
  dictionary.resize(whole - before - 1, ' ');
  dictionary += '\n';
  std::string header("\x93NUMPY\x01\x00", 8);
  header += static_cast<char>(dictionary.size() & 0xFF);
  header += static_cast<char>(dictionary.size() >> 8);
  return header + dictionary;
}

}  // namespace tambour
