// PNG files. The chunks are checked and sifted here, so that the decoder meets only whole and harmless ones: its
// library would print a complaint about others on the standard error stream.
#include <array>
#include <cstring>
#include <string_view>

#include "files/byte_order.hpp"
#include "files/exif.hpp"
#include "files/image_file.hpp"
#include "files/picture_decoder.hpp"
#include "files/refuse.hpp"

namespace tambour {
namespace {

constexpr std::size_t signature_bytes = 8;
constexpr std::size_t chunk_overhead = 12;  // length, type and checksum

struct Chunk {
  std::string type;
  std::uint64_t data = 0;  // offset
  std::uint32_t length = 0;
};

constexpr std::array<std::uint32_t, 256> crc_table = [] {
  std::array<std::uint32_t, 256> table{};
  for (std::uint32_t i = 0; i < 256; ++i) {
    std::uint32_t value = i;
    for (int bit = 0; bit < 8; ++bit) value = (value & 1) != 0 ? 0xEDB88320U ^ (value >> 1) : value >> 1;
    table[i] = value;
  }
  return table;
}();

// The CRC-32 of PNG (ISO 3309).
std::uint32_t checksum(const std::byte* data, std::size_t count) {
  std::uint32_t value = 0xFFFFFFFFU;
  for (std::size_t i = 0; i < count; ++i)
    value = crc_table[(value ^ std::to_integer<std::uint32_t>(data[i])) & 0xFF] ^ (value >> 8);
  return ~value;
}

Chunk chunk_at(const ReadFile& file, const ReadFile::Descriptor& descriptor, std::uint64_t offset) {
  std::byte head[8];
  file.read(descriptor, offset, head);
  const auto length = load<std::uint32_t>(head, true);
  if (offset + chunk_overhead + length > file.size())
    refuse_input("{}: a chunk of {} bytes begins at byte {}, but the file has only {} bytes: truncated", file.path(),
                 length, offset, file.size());
  return {std::string(reinterpret_cast<const char*>(head + 4), 4), offset + 8, length};
}

class PngFile final : public ImageFile {
 public:
  PngFile(SharedReadFile file, const OpenOptions& options) : file_(std::move(file)) {
    const auto descriptor = file_->descriptor();
    read_header(*descriptor);
    std::string remark;
    weights_ = choose_samples(file_->path(), header_.samples, header_.kind, options.channel, remark);
    if (!remark.empty()) remarks_.push_back(remark);
    look_for_orientation(*descriptor);
  }

  std::size_t pages() const noexcept override { return 1; }
  FrameShape shape(std::size_t) const override { return header_.shape; }
  PixelSize pixel_size() const override { return {}; }
  std::vector<std::string> remarks() const override { return remarks_; }

  FrameShape read(std::size_t, ImageView<double> out) const override {
    if (header_.shape != shape_of(out)) return header_.shape;
    std::vector<std::byte> bytes(static_cast<std::size_t>(file_->size()));
    file_->read(0, bytes);
    bytes.resize(keep_critical_chunks(bytes));
    decode_picture(file_->path(), bytes, header_, weights_, out);
    return header_.shape;
  }

 private:
  void read_header(const ReadFile::Descriptor& descriptor) {
    const Chunk chunk = chunk_at(*file_, descriptor, signature_bytes);
    if (chunk.type != "IHDR" || chunk.length != 13) refuse_input("{}: does not begin with a PNG header", file_->path());
    std::byte data[13];
    file_->read(descriptor, chunk.data, data);
    header_.shape.columns = static_cast<std::ptrdiff_t>(load<std::uint32_t>(data, true));
    header_.shape.rows = static_cast<std::ptrdiff_t>(load<std::uint32_t>(data + 4, true));
    const int bits = std::to_integer<int>(data[8]);
    const int colour_type = std::to_integer<int>(data[9]);
    constexpr int uses_colour = 2, uses_palette = 1, uses_alpha = 4;
    if (colour_type > 6 || colour_type == 1 || colour_type == 5)
      refuse_input("{}: has PNG colour type {}; allowed are 0, 2, 3, 4 and 6", file_->path(), colour_type);
    header_.kind = (colour_type & uses_colour) != 0 ? PixelKind::colour : PixelKind::grey;
    header_.samples = header_.kind == PixelKind::colour ? 3 : 1;
    if ((colour_type & uses_alpha) != 0) ++header_.samples;
    PictureHeader stored = header_;
    needs_palette_ = (colour_type & uses_palette) != 0;
    if (needs_palette_) stored.samples = 1;
    check_picture_size(file_->path(), stored, bits, file_->size(), deflate_expansion);
  }

  void look_for_orientation(const ReadFile::Descriptor& descriptor) {
    for (std::uint64_t offset = signature_bytes; offset + chunk_overhead <= file_->size();) {
      const Chunk chunk = chunk_at(*file_, descriptor, offset);
      if (chunk.type == "IDAT" || chunk.type == "IEND") return;
      if (chunk.type == "eXIf") {
        std::vector<std::byte> block(chunk.length);
        file_->read(descriptor, chunk.data, block);
        if (const int orientation = exif_orientation(block); orientation != 1)
          remarks_.push_back(fmt::format("EXIF orientation {} is ignored", orientation));
      }
      offset = chunk.data + chunk.length + 4;
    }
  }

  // Moves the chunks that pixels need to the front of the file's bytes and returns their end.
  std::size_t keep_critical_chunks(std::vector<std::byte>& bytes) const {
    std::size_t kept = signature_bytes;
    bool ended = false, has_palette = false, has_pixels = false;
    for (std::size_t offset = signature_bytes; !ended;) {
      if (offset + chunk_overhead > bytes.size())
        refuse_input("{}: ends before its last chunk: truncated", file_->path());
      const std::size_t length = load<std::uint32_t>(bytes.data() + offset, true);
      const std::size_t whole = chunk_overhead + length;
      if (offset + whole > bytes.size())
        refuse_input("{}: a chunk of {} bytes begins at byte {}, but the file has only {} bytes: truncated",
                     file_->path(), length, offset, bytes.size());
      const std::string_view type(reinterpret_cast<const char*>(bytes.data() + offset + 4), 4);
      ended = type == "IEND";
      has_palette = has_palette || type == "PLTE";
      has_pixels = has_pixels || type == "IDAT";
      if ((ended && !has_pixels) || (has_pixels && !has_palette && needs_palette_))
        refuse_input("{}: has no pixels, or none whose palette comes before them: damaged", file_->path());
      if (type == "IHDR" || type == "PLTE" || type == "IDAT" || ended) {
        if (checksum(bytes.data() + offset + 4, length + 4) !=
            load<std::uint32_t>(bytes.data() + offset + 8 + length, true))
          refuse_input("{}: the chunk at byte {} does not match its checksum: damaged", file_->path(), offset);
        std::memmove(bytes.data() + kept, bytes.data() + offset, whole);
        kept += whole;
      }
      offset += whole;
    }
    return kept;
  }

  SharedReadFile file_;
  PictureHeader header_;
  bool needs_palette_ = false;
  std::vector<SampleWeight> weights_;
  std::vector<std::string> remarks_;
};

}  // namespace

std::unique_ptr<ImageFile> open_png(SharedReadFile file, const OpenOptions& options) {
  return std::make_unique<PngFile>(std::move(file), options);
}

}  // namespace tambour
