// JPEG files. The markers are walked here for the size, for EXIF orientation and for the end of the data: the decoder
// would fill a truncated picture with grey without a word.
#include <string_view>

#include "files/byte_order.hpp"
#include "files/exif.hpp"
#include "files/image_file.hpp"
#include "files/picture_decoder.hpp"
#include "files/refuse.hpp"

namespace tambour {
namespace {

constexpr int start_of_scan = 0xDA;
constexpr int application_1 = 0xE1;

// Frame headers are C0 to CF save for Huffman tables, arithmetic conditioning and an extension.
bool is_frame_header(int marker) {
  return marker >= 0xC0 && marker <= 0xCF && marker != 0xC4 && marker != 0xC8 && marker != 0xCC;
}

struct Segment {
  int marker = 0;
  std::uint64_t data = 0;  // offset behind the length field
  std::size_t length = 0;  // without the length field
};

Segment segment_at(const ReadFile& file, const ReadFile::Descriptor& descriptor, std::uint64_t offset) {
  std::byte head[4];
  file.read(descriptor, offset, head);
  // Any number of fill bytes FF may stand before a marker.
  while (head[0] == std::byte{0xFF} && head[1] == std::byte{0xFF}) file.read(descriptor, ++offset, head);
  if (head[0] != std::byte{0xFF}) refuse_input("{}: no JPEG marker at byte {}: damaged", file.path(), offset);
  const std::size_t length = load<std::uint16_t>(head + 2, true);
  if (length < 2 || offset + 2 + length > file.size())
    refuse_input("{}: a segment of {} bytes begins at byte {}, but the file has only {} bytes: truncated", file.path(),
                 length, offset, file.size());
  return {std::to_integer<int>(head[1]), offset + 4, length - 2};
}

class JpegFile final : public ImageFile {
 public:
  JpegFile(SharedReadFile file, const OpenOptions& options) : file_(std::move(file)) {
    const auto descriptor = file_->descriptor();
    bool sized = false;
    for (std::uint64_t offset = 2; scan_ == 0;) {
      const Segment segment = segment_at(*file_, *descriptor, offset);
      if (is_frame_header(segment.marker)) {
        read_frame_header(*descriptor, segment);
        sized = true;
      }
      if (segment.marker == application_1) read_exif(*descriptor, segment);
      offset = segment.data + segment.length;
      if (segment.marker == start_of_scan) scan_ = offset;
    }
    if (!sized) refuse_input("{}: has no JPEG frame header", file_->path());
    std::string remark;
    weights_ = choose_samples(file_->path(), header_.samples, header_.kind, options.channel, remark);
    if (!remark.empty()) remarks_.push_back(remark);
  }

  std::size_t pages() const noexcept override { return 1; }
  FrameShape shape(std::size_t) const override { return header_.shape; }
  PixelSize pixel_size() const override { return {}; }
  std::vector<std::string> remarks() const override { return remarks_; }

  FrameShape read(std::size_t, ImageView<double> out) const override {
    if (header_.shape != shape_of(out)) return header_.shape;
    std::vector<std::byte> bytes(static_cast<std::size_t>(file_->size()));
    file_->read(0, bytes);
    const std::string_view data(reinterpret_cast<const char*>(bytes.data()), bytes.size());
    if (data.find("\xFF\xD9", static_cast<std::size_t>(scan_)) == std::string_view::npos)
      refuse_input("{}: has no end-of-image marker: truncated", file_->path());
    decode_picture(file_->path(), bytes, header_, weights_, out);
    return header_.shape;
  }

 private:
  void read_frame_header(const ReadFile::Descriptor& descriptor, const Segment& segment) {
    std::byte data[6];
    if (segment.length < sizeof(data)) refuse_input("{}: has a JPEG frame header that is too short", file_->path());
    file_->read(descriptor, segment.data, data);
    const int bits = std::to_integer<int>(data[0]);
    if (bits != 8) refuse_input("{}: has {} bits a sample; JPEG is read with 8", file_->path(), bits);
    header_.shape.rows = load<std::uint16_t>(data + 1, true);
    header_.shape.columns = load<std::uint16_t>(data + 3, true);
    const int components = std::to_integer<int>(data[5]);
    if (components != 1 && components != 3 && components != 4)
      refuse_input("{}: has {} components; JPEG is read with 1, 3 or 4", file_->path(), components);
    // Four components are cyan, magenta, yellow and black, which the decoder turns into red, green and blue.
    header_.samples = components == 1 ? 1 : 3;
    header_.kind = components == 1 ? PixelKind::grey : PixelKind::colour;
    check_picture_size(file_->path(), header_, bits, file_->size(), any_expansion);
  }

  void read_exif(const ReadFile::Descriptor& descriptor, const Segment& segment) {
    constexpr std::string_view label("Exif\0\0", 6);
    std::vector<std::byte> block(segment.length);
    file_->read(descriptor, segment.data, block);
    if (std::string_view(reinterpret_cast<const char*>(block.data()), block.size()).substr(0, label.size()) != label)
      return;
    const int orientation = exif_orientation(std::span<const std::byte>(block).subspan(label.size()));
    if (orientation != 1) remarks_.push_back(fmt::format("EXIF orientation {} is ignored", orientation));
  }

  SharedReadFile file_;
  PictureHeader header_;
  std::uint64_t scan_ = 0;  // where the coded data begins
  std::vector<SampleWeight> weights_;
  std::vector<std::string> remarks_;
};

}  // namespace

std::unique_ptr<ImageFile> open_jpeg(SharedReadFile file, const OpenOptions& options) {
  return std::make_unique<JpegFile>(std::move(file), options);
}

}  // namespace tambour
