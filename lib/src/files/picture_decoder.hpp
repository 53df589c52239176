// PNG and JPEG bytes to pixels, through OpenCV.
#pragma once

#include <cstddef>
#include <span>
#include <string>
#include <vector>

#include "files/frame_checks.hpp"
#include "files/image_file.hpp"

namespace tambour {

/// What the header of a PNG or JPEG file tells.
struct PictureHeader {
  FrameShape shape;
  int samples = 1;                   ///< a pixel, alpha included
  PixelKind kind = PixelKind::grey;  ///< grey or colour
};

/// Throws Error(bad_input) unless the size is one that the decoder accepts and `stored` bytes can hold.
void check_picture_size(const std::string& path, const PictureHeader& header, int bits_a_sample, std::uint64_t stored,
                        std::uint64_t expansion);

/// Decodes a whole file in memory. Throws Error(bad_input) when the decoder fails or contradicts the header.
void decode_picture(const std::string& path, std::span<const std::byte> bytes, const PictureHeader& header,
                    const std::vector<SampleWeight>& weights, ImageView<double> out);

}  // namespace tambour
