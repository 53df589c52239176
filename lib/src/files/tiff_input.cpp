// TIFF files of any number of pages, through libtiff.
#include <algorithm>
#include <mutex>

#include "files/byte_order.hpp"
#include "files/image_file.hpp"
#include "files/refuse.hpp"
#include "files/sample_mix.hpp"
#include "files/tiff_directories.hpp"
#include "files/tiff_handle.hpp"
#include "files/tiff_page.hpp"
#include "files/units.hpp"

namespace tambour {
namespace {

// A strip or a tile in memory: rows of samples, one plane's or all samples of a pixel side by side.
struct Block {
  std::ptrdiff_t first_row = 0, first_column = 0, rows = 0, columns = 0;  // the part inside the image
  std::size_t row_bytes = 0;
  std::vector<std::byte> bytes;
};

// Samples of 1 to 15 bits, the first in the highest bits, rows beginning on whole bytes.
std::vector<std::byte> unpack(const Block& block, int bits, std::size_t samples_a_row) {
  std::vector<std::byte> wide(static_cast<std::size_t>(block.rows) * samples_a_row * 2);
  std::byte* out = wide.data();
  for (std::ptrdiff_t y = 0; y < block.rows; ++y) {
    const std::byte* row = block.bytes.data() + static_cast<std::size_t>(y) * block.row_bytes;
    for (std::size_t i = 0; i < samples_a_row; ++i, out += 2) {
      unsigned value = 0;
      for (std::size_t bit = i * static_cast<std::size_t>(bits); bit < (i + 1) * static_cast<std::size_t>(bits); ++bit)
        value = value << 1 | (std::to_integer<unsigned>(row[bit / 8]) >> (7 - bit % 8) & 1);
      store(out, static_cast<std::uint16_t>(value), host_is_big_endian);
    }
  }
  return wide;
}

class TiffFile final : public ImageFile {
 public:
  TiffFile(SharedReadFile file, const OpenOptions& options)
      : file_(std::move(file)), channel_(options.channel), directories_(read_tiff_directories(*file_)) {
    const auto handle = borrow();
    TiffPage first = load_tiff_page(*handle, *file_, directories_.pages[0], channel_);
    shape_ = first.shape;
    remarks_ = first.remarks;
    std::string remark;
    pixel_size_ = tiff_pixel_size(handle->get(), remark);
    if (!remark.empty()) remarks_.push_back(remark);
    find_hidden_pages(handle->get(), first);
    if (directories_.left_out > 0)
      remarks_.push_back(fmt::format("{} pages are smaller copies or masks and left out", directories_.left_out));
  }

  std::size_t pages() const noexcept override {
    if (hidden_pages_ > 0) return hidden_pages_;
    return directories_.pages.size() + (directories_.broken.empty() ? 0 : 1);
  }

  FrameShape shape(std::size_t page) const override {
    if (page == 0 || hidden_pages_ > 0) return shape_;
    const auto handle = borrow();
    return load_tiff_page(*handle, *file_, directory(page), channel_).shape;
  }

  PixelSize pixel_size() const override { return pixel_size_; }
  std::vector<std::string> remarks() const override { return remarks_; }

  FrameShape read(std::size_t number, ImageView<double> out) const override {
    if (hidden_pages_ > 0) {
      if (shape_ == shape_of(out)) read_hidden(number, out);
      return shape_;
    }
    const auto handle = borrow();
    const TiffPage page = load_tiff_page(*handle, *file_, directory(number), channel_);
    if (page.shape == shape_of(out)) read_page(*handle, page, out);
    return page.shape;
  }

 private:
  void read_page(TiffHandle& handle, const TiffPage& page, ImageView<double> out) const {
    if (page.planar && page.weights.size() > 1) {
      std::vector<double> plane(static_cast<std::size_t>(out.rows * out.columns));
      for (std::size_t i = 0; i < page.weights.size(); ++i) {
        const ImageView<double> view(plane.data(), out.rows, out.columns);
        read_plane(handle, page, page.weights[i].sample, {{0, 1}}, view);
        for (std::ptrdiff_t y = 0; y < out.rows; ++y)
          for (std::ptrdiff_t x = 0; x < out.columns; ++x)
            out(y, x) = (i == 0 ? 0 : out(y, x)) + page.weights[i].weight * view(y, x);
      }
      return;
    }
    if (page.planar) return read_plane(handle, page, page.weights[0].sample, {{0, 1}}, out);
    read_plane(handle, page, 0, page.weights, out);
  }

  // A handle serves one reader at a time; afterwards it waits for the next.
  struct GiveBack {
    const TiffFile* owner;
    void operator()(TiffHandle* handle) const {
      std::unique_ptr<TiffHandle> owned(handle);
      if (!owner->file_->kept()) return;
      const std::lock_guard lock(owner->mutex_);
      owner->idle_.push_back(std::move(owned));
    }
  };
  using Borrowed = std::unique_ptr<TiffHandle, GiveBack>;

  Borrowed borrow() const {
    {
      const std::lock_guard lock(mutex_);
      if (!idle_.empty()) {
        Borrowed handle(idle_.back().release(), GiveBack{this});
        idle_.pop_back();
        return handle;
      }
    }
    return {new TiffHandle(file_), GiveBack{this}};
  }

  std::uint64_t directory(std::size_t page) const {
    if (page < directories_.pages.size()) return directories_.pages[page];
    refuse_input("{}: {}", file_->path(), directories_.broken);
  }

  // ImageJ writes stacks over 4 GB as one page whose description tells the number of images lying end to end.
  void find_hidden_pages(TIFF* tiff, const TiffPage& first) {
    const std::string description = tiff_text(tiff, TIFFTAG_IMAGEDESCRIPTION);
    const auto key = description.find("\nimages=");
    if (!description.starts_with("ImageJ=") || key == std::string::npos || directories_.pages.size() > 1) return;
    const auto told = leading_number(std::string_view(description).substr(key + 8));
    if (!told || *told < 2 || *told > 1e9 || first.compressed || first.tiled || first.packed || first.samples != 1)
      return;
    const auto count = static_cast<std::uint64_t>(*told);
    hidden_format_ = {first.type, TIFFIsBigEndian(tiff) != 0};
    hidden_data_ = TIFFGetStrileOffset(tiff, 0);
    const auto bytes = product({count, static_cast<std::uint64_t>(shape_.rows),
                                static_cast<std::uint64_t>(shape_.columns), sample_bytes(first.type)});
    if (!bytes || hidden_data_ > file_->size() || *bytes > file_->size() - hidden_data_)
      refuse_input(
          "{}: its description tells {} images of {} x {} pixels (rows x columns), but the file has only {} bytes",
          file_->path(), count, shape_.rows, shape_.columns, file_->size());
    hidden_pages_ = static_cast<std::size_t>(count);
  }

  void read_hidden(std::size_t page, ImageView<double> out) const {
    const std::size_t stride = sample_bytes(hidden_format_.type);
    const auto columns = static_cast<std::size_t>(out.columns);
    std::vector<std::byte> bytes(static_cast<std::size_t>(out.rows) * columns * stride);
    file_->read(hidden_data_ + page * bytes.size(), bytes);
    for (std::ptrdiff_t y = 0; y < out.rows; ++y)
      decode_samples(hidden_format_, bytes.data() + static_cast<std::size_t>(y) * columns * stride, stride, columns,
                     out.row(y));
  }

  // Reads all strips or tiles of a plane (the only one unless the page is planar) into `out`.
  void read_plane(TiffHandle& handle, const TiffPage& page, int plane, const std::vector<SampleWeight>& weights,
                  ImageView<double> out) const {
    TIFF* tiff = handle.get();
    const auto samples = static_cast<std::size_t>(page.planar ? 1 : page.samples);
    Block block;
    block.row_bytes =
        (static_cast<std::size_t>(page.block_columns) * samples * static_cast<std::size_t>(page.bits) + 7) / 8;
    block.bytes.resize(block.row_bytes * static_cast<std::size_t>(page.block_rows));
    for (block.first_row = 0; block.first_row < out.rows; block.first_row += page.block_rows) {
      block.rows = std::min(page.block_rows, out.rows - block.first_row);
      for (block.first_column = 0; block.first_column < out.columns; block.first_column += page.block_columns) {
        block.columns = std::min(page.block_columns, out.columns - block.first_column);
        const auto x = static_cast<std::uint32_t>(block.first_column), y = static_cast<std::uint32_t>(block.first_row);
        const auto sample = static_cast<std::uint16_t>(plane);
        // A tile is always whole; the last strip has only the rows that are left.
        const std::size_t needed =
            page.tiled ? block.bytes.size() : block.row_bytes * static_cast<std::size_t>(block.rows);
        const auto size = static_cast<tmsize_t>(needed);
        const tmsize_t got =
            page.tiled ? TIFFReadEncodedTile(tiff, TIFFComputeTile(tiff, x, y, 0, sample), block.bytes.data(), size)
                       : TIFFReadEncodedStrip(tiff, TIFFComputeStrip(tiff, y, sample), block.bytes.data(), size);
        if (got < size)
          refuse_input("{}: pixels from row {}, column {} on cannot be read ({})", file_->path(), y, x,
                       handle.take_error());
        place(block, page, samples, weights, out);
      }
    }
  }

  static void place(const Block& block, const TiffPage& page, std::size_t samples,
                    const std::vector<SampleWeight>& weights, ImageView<double> out) {
    const std::size_t bytes = sample_bytes(page.type);
    const std::size_t samples_a_row = static_cast<std::size_t>(page.block_columns) * samples;
    const auto unpacked = page.packed ? unpack(block, page.bits, samples_a_row) : std::vector<std::byte>{};
    const std::byte* first = page.packed ? unpacked.data() : block.bytes.data();
    const std::size_t row_bytes = page.packed ? samples_a_row * bytes : block.row_bytes;
    // libtiff hands out numbers in the order of the host.
    const SampleFormat format{page.type, host_is_big_endian};
    std::vector<double> scratch(static_cast<std::size_t>(block.columns));
    for (std::ptrdiff_t y = 0; y < block.rows; ++y) {
      const std::byte* row = first + static_cast<std::size_t>(y) * row_bytes;
      double* to = out.row(block.first_row + y) + block.first_column;
      mix_samples(weights, block.columns, scratch.data(), to, [&](int sample, double* decoded) {
        decode_samples(format, row + static_cast<std::size_t>(sample) * bytes, samples * bytes,
                       static_cast<std::size_t>(block.columns), decoded);
      });
      if (!page.palette.empty())
        for (std::ptrdiff_t x = 0; x < block.columns; ++x) to[x] = page.palette[static_cast<std::size_t>(to[x])];
    }
  }

  SharedReadFile file_;
  std::optional<int> channel_;
  TiffDirectories directories_;
  FrameShape shape_;
  PixelSize pixel_size_;
  std::vector<std::string> remarks_;
  std::size_t hidden_pages_ = 0;
  SampleFormat hidden_format_;
  std::uint64_t hidden_data_ = 0;
  mutable std::mutex mutex_;
  mutable std::vector<std::unique_ptr<TiffHandle>> idle_;
};

}  // namespace

std::unique_ptr<ImageFile> open_tiff(SharedReadFile file, const OpenOptions& options) {
  return std::make_unique<TiffFile>(std::move(file), options);
}

}  // namespace tambour
