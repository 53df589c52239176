// The header of a NumPy .npy array.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "tambour/files.hpp"

namespace tambour {

/// Format version 1.0, C order, the host's byte order; a multiple of 64 bytes long.
std::string npy_header(PixelType type, const std::vector<std::size_t>& shape);

}  // namespace tambour
