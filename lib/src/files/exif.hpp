// The one thing looked for in EXIF data.
#pragma once

#include <cstddef>
#include <span>

namespace tambour {

/// Orientation (tag 274) of a TIFF-structured EXIF block, 1 to 8; 1 (upright) when there is none or the block is
/// damaged.
int exif_orientation(std::span<const std::byte> block);

}  // namespace tambour
