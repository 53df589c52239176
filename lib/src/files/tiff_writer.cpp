// Multi-page TIFF of 32- or 64-bit floats; BigTIFF where 32-bit offsets would not do.
#include <limits>

#include "files/frame_checks.hpp"
#include "files/output_file.hpp"
#include "files/refuse.hpp"
#include "files/stack_writer.hpp"
#include "files/tiff_handle.hpp"
#include "files/units.hpp"
#include "tambour/version.hpp"

namespace tambour {
namespace {

// Some readers take offsets for signed, so the classic flavour ends at 2 GB; a page's directory has some 300 bytes.
bool needs_big_tiff(const StackShape& shape) {
  constexpr std::uint64_t limit = 2'000'000'000, directory_bytes = 512;
  const auto pixels = product({static_cast<std::uint64_t>(shape.rows), static_cast<std::uint64_t>(shape.columns), 8});
  const auto total = pixels ? product({*pixels + directory_bytes, shape.images}) : std::nullopt;
  return !total || *total > limit;
}

class TiffWriter final : public CheckedStackWriter {
 public:
  TiffWriter(const std::string& path, const StackShape& shape, bool overwrite)
      : CheckedStackWriter(path, shape), file_(path, overwrite), tiff_(file_, needs_big_tiff(shape)) {}

 private:
  template <class... Values>
  void set(std::uint32_t tag, Values... values) {
    if (TIFFSetField(tiff_.get(), tag, values...) != 1) fail();
  }

  [[noreturn]] void fail() { refuse_output("{}: cannot be written ({})", path(), tiff_.take_error()); }

  void put(ImageView<const double> image) override {
    encode_pixels(image, shape().type, pixels_);
    set(TIFFTAG_IMAGEWIDTH, static_cast<std::uint32_t>(image.columns));
    set(TIFFTAG_IMAGELENGTH, static_cast<std::uint32_t>(image.rows));
    set(TIFFTAG_ROWSPERSTRIP, static_cast<std::uint32_t>(image.rows));
    set(TIFFTAG_BITSPERSAMPLE, shape().type == PixelType::float32 ? 32 : 64);
    set(TIFFTAG_SAMPLEFORMAT, SAMPLEFORMAT_IEEEFP);
    set(TIFFTAG_SAMPLESPERPIXEL, 1);
    set(TIFFTAG_PLANARCONFIG, PLANARCONFIG_CONTIG);
    set(TIFFTAG_PHOTOMETRIC, PHOTOMETRIC_MINISBLACK);
    set(TIFFTAG_COMPRESSION, COMPRESSION_NONE);
    describe();
    if (TIFFWriteEncodedStrip(tiff_.get(), 0, pixels_.data(), static_cast<tmsize_t>(pixels_.size())) < 0) fail();
    if (TIFFWriteDirectory(tiff_.get()) != 1) fail();
  }

  void describe() {
    if (const auto pixel = convert_length(shape().pixel_size, "centimetre"); pixel && *pixel > 0) {
      set(TIFFTAG_RESOLUTIONUNIT, RESUNIT_CENTIMETER);
      set(TIFFTAG_XRESOLUTION, 1 / *pixel);
      set(TIFFTAG_YRESOLUTION, 1 / *pixel);
    }
    if (done() > 0) return;
    set(TIFFTAG_SOFTWARE, fmt::format("tambour {}", version()).c_str());
    // The tags above know no unit under a centimetre and none that is not a length; this note keeps what was given.
    if (shape().pixel_size.known())
      set(TIFFTAG_IMAGEDESCRIPTION,
          fmt::format("tambour\npixel_size={}\nunit={}\n", shape().pixel_size.value, shape().pixel_size.unit).c_str());
  }

  void complete() override {
    tiff_.close();
    if (tiff_.has_error()) fail();
    file_.commit();
  }

  AtomicFile file_;
  TiffHandle tiff_;
  std::vector<std::byte> pixels_;
};

}  // namespace

std::unique_ptr<StackWriter> create_tiff(const std::string& path, const StackShape& shape, bool overwrite) {
  constexpr std::ptrdiff_t largest = std::numeric_limits<std::int32_t>::max();
  if (shape.rows > largest || shape.columns > largest)
    throw Error(ErrorCode::invalid_argument, path + ": TIFF is written with at most 2^31 - 1 rows and columns");
  return std::make_unique<TiffWriter>(path, shape, overwrite);
}

}  // namespace tambour
