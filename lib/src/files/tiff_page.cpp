#include "files/tiff_page.hpp"

#include <algorithm>

#include "files/refuse.hpp"

namespace tambour {
namespace {

template <class T>
T tag(TIFF* tiff, std::uint32_t number, T otherwise) {
  T value = otherwise;
  return TIFFGetFieldDefaulted(tiff, number, &value) == 1 ? value : otherwise;
}

void find_type(TiffPage& page, TIFF* tiff, const std::string& path) {
  page.bits = tag<std::uint16_t>(tiff, TIFFTAG_BITSPERSAMPLE, 1);
  const auto format = tag<std::uint16_t>(tiff, TIFFTAG_SAMPLEFORMAT, SAMPLEFORMAT_UINT);
  // "Void" means that the writer did not know; unsigned integers are what the specification assumes.
  const bool is_unsigned = format == SAMPLEFORMAT_UINT || format == SAMPLEFORMAT_VOID;
  page.packed = is_unsigned && page.bits > 0 && page.bits < 16 && page.bits != 8;
  const char kind = is_unsigned ? 'u' : format == SAMPLEFORMAT_INT ? 'i' : format == SAMPLEFORMAT_IEEEFP ? 'f' : '?';
  const std::size_t bytes = page.bits % 8 == 0 ? static_cast<std::size_t>(page.bits / 8) : 0;
  const auto type = page.packed ? std::optional(SampleType::u2) : sample_type(kind, bytes);
  if (!type)
    refuse_input(
        "{}: has samples of {} bits in TIFF sample format {}; allowed are integers of 1 to 16, 32 and 64 bits "
        "and floats of 16, 32 and 64 bits",
        path, page.bits, format);
  page.type = *type;
}

PixelKind find_kind(const TiffPage& page, TIFF* tiff, std::uint16_t photometric, std::optional<int> channel,
                    const std::string& path) {
  switch (photometric) {
    case PHOTOMETRIC_RGB:
      return page.samples >= 3 ? PixelKind::colour : PixelKind::channels;
    case PHOTOMETRIC_YCBCR:
      // JPEG data is turned into red, green and blue by the codec; other YCbCr data may be subsampled.
      if (tag<std::uint16_t>(tiff, TIFFTAG_COMPRESSION, COMPRESSION_NONE) == COMPRESSION_JPEG && page.samples == 3)
        return PixelKind::colour;
      break;
    case PHOTOMETRIC_MINISBLACK:
    case PHOTOMETRIC_MINISWHITE: {
      std::uint16_t extra = 0;
      std::uint16_t* kinds = nullptr;
      TIFFGetField(tiff, TIFFTAG_EXTRASAMPLES, &extra, &kinds);
      const bool alpha = page.samples == 2 && extra == 1 && kinds[0] != EXTRASAMPLE_UNSPECIFIED;
      return page.samples == 1 || alpha ? PixelKind::grey : PixelKind::channels;
    }
    case PHOTOMETRIC_PALETTE:
      return PixelKind::grey;
    default:
      if (channel || page.samples == 1) return PixelKind::channels;
      break;
  }
  refuse_input("{}: has TIFF colour space {}; allowed are grey, palette, red-green-blue, or one channel of another",
               path, photometric);
}

// Values of the palette's entries, from 0 to 255 as colours of 8 bits have.
void load_palette(TiffPage& page, TIFF* tiff, std::optional<int> channel, const std::string& path) {
  std::uint16_t* colours[3] = {};
  const bool indexed = page.type == SampleType::u1 || page.packed;
  if (!indexed || page.samples != 1 || page.bits > 8 ||
      TIFFGetField(tiff, TIFFTAG_COLORMAP, &colours[0], &colours[1], &colours[2]) != 1)
    refuse_input("{}: is a palette image without a usable palette", path);
  std::string remark;
  const auto weights = choose_samples(path, 3, PixelKind::colour, channel, remark);
  // Palettes have 16 bits, filled as 256 v or 257 v; old writers filled them as v.
  bool wide = false;
  for (std::size_t i = 0; i < std::size_t{1} << page.bits; ++i)
    for (const auto* colour : colours) wide = wide || colour[i] >= 256;
  const int shift = wide ? 8 : 0;
  page.palette.assign(std::size_t{1} << page.bits, 0.0);
  for (std::size_t i = 0; i < page.palette.size(); ++i)
    for (const auto& [sample, weight] : weights) page.palette[i] += weight * (colours[sample][i] >> shift);
  page.weights = {{0, 1}};
  page.remarks.push_back("palette, " + remark);
}

void check_size(const TiffPage& page, TIFF* tiff, const ReadFile& file) {
  // Tiles are stored whole, also where they reach over the edge.
  const auto rows = static_cast<std::uint64_t>(std::max(page.shape.rows, page.block_rows));
  const auto columns = static_cast<std::uint64_t>(std::max(page.shape.columns, page.block_columns));
  const auto bits =
      product({rows, columns, static_cast<std::uint64_t>(page.samples), static_cast<std::uint64_t>(page.bits)});
  const auto compression = tag<std::uint16_t>(tiff, TIFFTAG_COMPRESSION, COMPRESSION_NONE);
  const bool deflate = compression == COMPRESSION_DEFLATE || compression == COMPRESSION_ADOBE_DEFLATE;
  if (page.compressed)
    return check_expansion(file.path(), bits ? std::optional(*bits / 8) : std::nullopt, file.size(),
                           deflate ? deflate_expansion : any_expansion);
  if (!bits || *bits / 8 > file.size())
    refuse_input(
        "{}: the header tells {} x {} pixels (rows x columns) of {} samples of {} bits, but the file has only {} "
        "bytes",
        file.path(), page.shape.rows, page.shape.columns, page.samples, page.bits, file.size());
}

void find_blocks(TiffPage& page, TIFF* tiff, const ReadFile& file) {
  page.tiled = TIFFIsTiled(tiff) != 0;
  if (page.tiled) {
    page.block_rows = static_cast<std::ptrdiff_t>(tag<std::uint32_t>(tiff, TIFFTAG_TILELENGTH, 0));
    page.block_columns = static_cast<std::ptrdiff_t>(tag<std::uint32_t>(tiff, TIFFTAG_TILEWIDTH, 0));
  } else {
    const auto rows = static_cast<std::ptrdiff_t>(tag<std::uint32_t>(tiff, TIFFTAG_ROWSPERSTRIP, 0xFFFFFFFFU));
    page.block_rows = std::min(rows, page.shape.rows);
    page.block_columns = page.shape.columns;
  }
  if (page.block_rows < 1 || page.block_columns < 1)
    refuse_input("{}: has blocks of {} x {} pixels (rows x columns); allowed is 1 or more of each", file.path(),
                 page.block_rows, page.block_columns);
}

}  // namespace

std::string tiff_text(TIFF* tiff, std::uint32_t number) {
  char* text = nullptr;
  return TIFFGetField(tiff, number, &text) == 1 && text != nullptr ? text : "";
}

TiffPage load_tiff_page(TiffHandle& handle, const ReadFile& file, std::uint64_t offset, std::optional<int> channel) {
  TIFF* tiff = handle.get();
  const std::string& path = file.path();
  handle.take_error();
  if (TIFFSetSubDirectory(tiff, offset) != 1)
    refuse_input("{}: the directory at byte {} cannot be read ({})", path, offset, handle.take_error());
  TiffPage page;
  page.shape.columns = static_cast<std::ptrdiff_t>(tag<std::uint32_t>(tiff, TIFFTAG_IMAGEWIDTH, 0));
  page.shape.rows = static_cast<std::ptrdiff_t>(tag<std::uint32_t>(tiff, TIFFTAG_IMAGELENGTH, 0));
  page.samples = tag<std::uint16_t>(tiff, TIFFTAG_SAMPLESPERPIXEL, 1);
  if (page.shape.rows < 1 || page.shape.columns < 1 || page.samples < 1)
    refuse_input("{}: has {} x {} pixels (rows x columns) of {} samples; allowed is 1 or more of each", path,
                 page.shape.rows, page.shape.columns, page.samples);
  const auto compression = tag<std::uint16_t>(tiff, TIFFTAG_COMPRESSION, COMPRESSION_NONE);
  if (TIFFIsCODECConfigured(compression) != 1)
    refuse_input("{}: is compressed by TIFF scheme {}, which the installed libtiff cannot read", path, compression);
  page.compressed = compression != COMPRESSION_NONE;
  if (compression == COMPRESSION_JPEG) TIFFSetField(tiff, TIFFTAG_JPEGCOLORMODE, JPEGCOLORMODE_RGB);
  page.planar =
      page.samples > 1 && tag<std::uint16_t>(tiff, TIFFTAG_PLANARCONFIG, PLANARCONFIG_CONTIG) == PLANARCONFIG_SEPARATE;
  find_type(page, tiff, path);
  find_blocks(page, tiff, file);
  check_size(page, tiff, file);

  const auto photometric = tag<std::uint16_t>(tiff, TIFFTAG_PHOTOMETRIC, PHOTOMETRIC_MINISBLACK);
  const PixelKind kind = find_kind(page, tiff, photometric, channel, path);
  if (photometric == PHOTOMETRIC_PALETTE) {
    load_palette(page, tiff, channel, path);
  } else {
    std::string remark;
    page.weights = choose_samples(path, page.samples, kind, channel, remark);
    if (!remark.empty()) page.remarks.push_back(remark);
  }
  if (photometric == PHOTOMETRIC_MINISWHITE)
    page.remarks.emplace_back("smallest value means white; values are read as stored, so contrast is inverted");
  if (tag<std::uint16_t>(tiff, TIFFTAG_ORIENTATION, ORIENTATION_TOPLEFT) != ORIENTATION_TOPLEFT)
    page.remarks.emplace_back("the orientation tag is ignored");
  return page;
}

}  // namespace tambour
