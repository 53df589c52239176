#include "files/tiff_directories.hpp"

#include <unordered_set>

#include "files/byte_order.hpp"
#include "files/refuse.hpp"

namespace tambour {
namespace {

// The two flavours differ only in the widths of their numbers.
struct Flavour {
  bool big_endian = false;
  bool big_tiff = false;
  std::uint64_t count_bytes() const { return big_tiff ? 8 : 2; }
  std::uint64_t entry_bytes() const { return big_tiff ? 20 : 12; }
  std::uint64_t offset_bytes() const { return big_tiff ? 8 : 4; }

  std::uint64_t number(const std::byte* from, std::uint64_t bytes) const {
    if (bytes == 2) return load<std::uint16_t>(from, big_endian);
    if (bytes == 4) return load<std::uint32_t>(from, big_endian);
    return load<std::uint64_t>(from, big_endian);
  }
};

// Bits of the tag NewSubfileType: a smaller copy of another page, and a transparency mask.
constexpr std::uint64_t reduced_or_mask = 1 | 4;

std::uint64_t subfile_type(const Flavour& flavour, const std::byte* entries, std::uint64_t count) {
  constexpr std::uint16_t new_subfile_type = 254;
  for (std::uint64_t i = 0; i < count; ++i) {
    const std::byte* entry = entries + i * flavour.entry_bytes();
    if (load<std::uint16_t>(entry, flavour.big_endian) == new_subfile_type)
      return load<std::uint32_t>(entry + flavour.entry_bytes() - flavour.offset_bytes(), flavour.big_endian);
  }
  return 0;
}

}  // namespace

TiffDirectories read_tiff_directories(const ReadFile& file) {
  const auto descriptor = file.descriptor();
  const auto head = file.head(16);
  if (head.size() < 8) refuse_input("{}: has {} bytes; a TIFF header alone has 8", file.path(), head.size());
  Flavour flavour;
  flavour.big_endian = head[0] == std::byte{'M'};
  flavour.big_tiff = load<std::uint16_t>(head.data() + 2, flavour.big_endian) == 43;
  if (flavour.big_tiff && head.size() < 16)
    refuse_input("{}: has {} bytes; a BigTIFF header alone has 16", file.path(), head.size());
  std::uint64_t offset = flavour.number(head.data() + flavour.offset_bytes(), flavour.offset_bytes());

  TiffDirectories directories;
  std::unordered_set<std::uint64_t> seen;
  std::vector<std::byte> bytes;
  while (offset != 0) {
    const auto page = seen.size();
    if (!seen.insert(offset).second) {
      directories.broken = fmt::format("the directory after page {} is that of an earlier page: damaged", page - 1);
      break;
    }
    std::uint64_t count = 0;
    const bool begins = offset < file.size() && file.size() - offset >= flavour.count_bytes();
    if (begins) {
      bytes.resize(flavour.count_bytes());
      file.read(*descriptor, offset, bytes);
      count = flavour.number(bytes.data(), flavour.count_bytes());
    }
    const std::uint64_t behind_count = offset + flavour.count_bytes();
    if (!begins || count > 65535 ||
        count * flavour.entry_bytes() + flavour.offset_bytes() > file.size() - behind_count) {
      directories.broken =
          fmt::format("the directory of page {} at byte {} does not fit into the file of {} bytes: truncated", page,
                      offset, file.size());
      break;
    }
    bytes.resize(static_cast<std::size_t>(count * flavour.entry_bytes() + flavour.offset_bytes()));
    file.read(*descriptor, behind_count, bytes);
    if ((subfile_type(flavour, bytes.data(), count) & reduced_or_mask) == 0)
      directories.pages.push_back(offset);
    else
      ++directories.left_out;
    offset = flavour.number(bytes.data() + count * flavour.entry_bytes(), flavour.offset_bytes());
  }
  if (directories.pages.empty()) {
    if (!directories.broken.empty()) refuse_input("{}: {}", file.path(), directories.broken);
    refuse_input("{}: holds no image", file.path());
  }
  return directories;
}

}  // namespace tambour
