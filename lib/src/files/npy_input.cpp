// NumPy .npy arrays, format versions 1 to 3. Source: the format's description in NumPy's documentation
// (numpy.lib.format).
#include <sys/mman.h>

#include <cctype>
#include <cerrno>
#include <charconv>
#include <string_view>

#include "files/byte_order.hpp"
#include "files/frame_checks.hpp"
#include "files/image_file.hpp"
#include "files/refuse.hpp"
#include "files/sample_type.hpp"

namespace tambour {
namespace {

struct NpyHeader {
  SampleFormat format;
  bool fortran_order = false;
  std::vector<std::uint64_t> shape;
  std::uint64_t data = 0;  // offset
};

// The text behind `'key':` in the header's dictionary.
std::string_view entry(const std::string& path, std::string_view dictionary, std::string_view key) {
  for (const char quote : {'\'', '"'}) {
    const std::string quoted = quote + std::string(key) + quote;
    auto place = dictionary.find(quoted);
    if (place == std::string_view::npos) continue;
    place = dictionary.find_first_not_of(" :\t", place + quoted.size());
    if (place != std::string_view::npos) return dictionary.substr(place);
  }
  refuse_input("{}: the .npy header has no entry '{}'", path, key);
}

SampleFormat parse_type(const std::string& path, std::string_view text) {
  const auto end = text.size() < 2 ? std::string_view::npos : text.find(text[0], 1);
  const bool quoted = end != std::string_view::npos && (text[0] == '\'' || text[0] == '"');
  const std::string_view type = quoted ? text.substr(1, end - 1) : text.substr(0, 30);
  constexpr std::string_view orders = "<>|=";
  if (quoted && type.size() == 3 && orders.find(type[0]) != std::string_view::npos) {
    const char kind = type[1] == 'b' ? 'u' : type[1];  // a boolean is a byte of 0 or 1
    const auto found = sample_type(kind, static_cast<std::size_t>(type[2] - '0'));
    if (found) return {*found, type[0] == '>' || (type[0] == '=' && host_is_big_endian)};
  }
  refuse_input(
      "{}: has elements of type {}; allowed are integers (u1 to u8, i1 to i8), floats (f2, f4, f8) and booleans", path,
      type);
}

std::vector<std::uint64_t> parse_shape(const std::string& path, std::string_view text) {
  std::vector<std::uint64_t> shape;
  const auto end = text.find(')');
  if (text.empty() || text[0] != '(' || end == std::string_view::npos)
    refuse_input("{}: the .npy header has no readable shape", path);
  text = text.substr(1, end - 1);
  while (true) {
    const auto digit = text.find_first_of("0123456789-");
    if (digit == std::string_view::npos) return shape;
    std::uint64_t size = 0;
    const auto [behind, failure] = std::from_chars(text.data() + digit, text.data() + text.size(), size);
    if (failure != std::errc{}) refuse_input("{}: the .npy header has the shape ({})", path, text);
    shape.push_back(size);
    text.remove_prefix(static_cast<std::size_t>(behind - text.data()));
  }
}

NpyHeader read_header(const ReadFile& file) {
  constexpr std::size_t magic_bytes = 6, longest_header = 1 << 20;
  const auto head = file.head(magic_bytes + 6);
  if (head.size() < magic_bytes + 6) refuse_input("{}: ends inside its .npy header: truncated", file.path());
  const int version = std::to_integer<int>(head[magic_bytes]);
  if (version < 1 || version > 3)
    refuse_input("{}: is .npy format version {}; allowed are 1 to 3", file.path(), version);
  const std::size_t begin = magic_bytes + (version == 1 ? 4 : 6);
  const std::uint64_t length = version == 1 ? load<std::uint16_t>(head.data() + magic_bytes + 2, false)
                                            : load<std::uint32_t>(head.data() + magic_bytes + 2, false);
  if (length > longest_header || begin + length > file.size())
    refuse_input("{}: tells a header of {} bytes, but the file has only {} bytes (allowed are 2^20)", file.path(),
                 length, file.size());
  std::vector<std::byte> text(static_cast<std::size_t>(length));
  file.read(begin, text);
  const std::string_view dictionary(reinterpret_cast<const char*>(text.data()), text.size());
  NpyHeader header;
  header.format = parse_type(file.path(), entry(file.path(), dictionary, "descr"));
  header.fortran_order = entry(file.path(), dictionary, "fortran_order").substr(0, 4) == "True";
  header.shape = parse_shape(file.path(), entry(file.path(), dictionary, "shape"));
  header.data = begin + length;
  return header;
}

class NpyFile final : public ImageFile {
 public:
  NpyFile(SharedReadFile file, const OpenOptions& options) : file_(std::move(file)), header_(read_header(*file_)) {
    auto& shape = header_.shape;
    const std::size_t dimensions = shape.size();
    if (dimensions != 2 && dimensions != 3)
      refuse_input("{}: has {} dimensions; allowed are 2 (rows, columns) and 3 (images, rows, columns)", file_->path(),
                   dimensions);
    if (dimensions == 2) shape.insert(shape.begin(), 1);
    const auto total = product({shape[0], shape[1], shape[2], sample_bytes(header_.format.type)});
    const std::uint64_t stored = file_->size() - header_.data;
    if (!total || *total > stored)
      refuse_input(
          "{}: the header tells {} images of {} x {} pixels (rows x columns) of {} bytes each, "
          "but behind the header the file has only {} bytes",
          file_->path(), shape[0], shape[1], shape[2], sample_bytes(header_.format.type), stored);
    if (*total == 0)
      refuse_input("{}: holds no pixel: its shape is {} x {} x {}", file_->path(), shape[0], shape[1], shape[2]);
    if (*total < stored)
      remarks_.push_back(fmt::format("holds {} bytes more than its header tells, which are not read", stored - *total));
    if (dimensions == 3 && shape[2] <= 4)
      remarks_.push_back(
          fmt::format("read as {} images of {} x {} pixels (rows x columns)", shape[0], shape[1], shape[2]));
    if (header_.fortran_order) map(*total);
    std::string remark;
    choose_samples(file_->path(), 1, PixelKind::grey, options.channel, remark);
  }

  ~NpyFile() override {
    if (mapped_ != nullptr) ::munmap(mapped_, mapped_bytes_);
  }

  std::size_t pages() const noexcept override { return static_cast<std::size_t>(header_.shape[0]); }
  FrameShape shape(std::size_t) const override {
    return {static_cast<std::ptrdiff_t>(header_.shape[1]), static_cast<std::ptrdiff_t>(header_.shape[2])};
  }
  PixelSize pixel_size() const override { return {}; }
  std::vector<std::string> remarks() const override { return remarks_; }

  FrameShape read(std::size_t page, ImageView<double> out) const override {
    if (shape(page) != shape_of(out)) return shape(page);
    const std::size_t bytes = sample_bytes(header_.format.type);
    const auto rows = static_cast<std::size_t>(out.rows), columns = static_cast<std::size_t>(out.columns);
    if (header_.fortran_order) {
      // Element (image, y, x) lies at image + images * (y + rows * x).
      const auto* first = static_cast<const std::byte*>(mapped_) + header_.data + page * bytes;
      for (std::size_t y = 0; y < rows; ++y)
        decode_samples(header_.format, first + y * pages() * bytes, pages() * rows * bytes, columns,
                       out.row(static_cast<std::ptrdiff_t>(y)));
      return shape(page);
    }
    std::vector<std::byte> image(rows * columns * bytes);
    file_->read(header_.data + page * image.size(), image);
    for (std::size_t y = 0; y < rows; ++y)
      decode_samples(header_.format, image.data() + y * columns * bytes, bytes, columns,
                     out.row(static_cast<std::ptrdiff_t>(y)));
    return shape(page);
  }

 private:
  // In Fortran order an image is strewn over the whole file; mapped memory gathers it without reading the rest.
  void map(std::uint64_t data_bytes) {
    mapped_bytes_ = static_cast<std::size_t>(header_.data + data_bytes);
    void* address = ::mmap(nullptr, mapped_bytes_, PROT_READ, MAP_SHARED, file_->descriptor()->number(), 0);
    if (address == MAP_FAILED)
      refuse_input("{}: cannot be mapped into memory ({})", file_->path(), system_reason(errno));
    mapped_ = address;
  }

  SharedReadFile file_;
  NpyHeader header_;
  void* mapped_ = nullptr;
  std::size_t mapped_bytes_ = 0;
  std::vector<std::string> remarks_;
};

}  // namespace

std::unique_ptr<ImageFile> open_npy(SharedReadFile file, const OpenOptions& options) {
  return std::make_unique<NpyFile>(std::move(file), options);
}

}  // namespace tambour
