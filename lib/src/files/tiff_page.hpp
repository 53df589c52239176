// What one TIFF directory tells about its pixels.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "files/frame_checks.hpp"
#include "files/image_file.hpp"
#include "files/sample_type.hpp"
#include "files/tiff_handle.hpp"

namespace tambour {

struct TiffPage {
  FrameShape shape;
  int bits = 1;         ///< of a sample
  int samples = 1;      ///< of a pixel
  bool planar = false;  ///< each sample in planes of its own
  bool tiled = false;
  std::ptrdiff_t block_rows = 0;     ///< of a strip or tile
  std::ptrdiff_t block_columns = 0;  ///< the whole width for strips
  bool compressed = false;
  SampleType type = SampleType::u1;  ///< of a sample once unpacked
  bool packed = false;               ///< 1 to 15 bits other than 8, unpacked to 16 here
  std::vector<SampleWeight> weights;
  std::vector<double> palette;  ///< value of each index; empty when samples are values
  std::vector<std::string> remarks;
};

/// Loads the directory at `offset` and checks all that can be checked before pixels are read: type, codec, and the
/// size against the file's length. Throws Error(bad_input).
TiffPage load_tiff_page(TiffHandle& handle, const ReadFile& file, std::uint64_t offset, std::optional<int> channel);

/// Pixel size told by the loaded directory: this library's own note, OME-XML, an ImageJ description, or the resolution
/// tags. `remark` is set where it deserves doubt.
PixelSize tiff_pixel_size(TIFF* tiff, std::string& remark);

/// Text of a tag; empty when absent.
std::string tiff_text(TIFF* tiff, std::uint32_t tag);

}  // namespace tambour
