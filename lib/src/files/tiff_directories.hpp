// Where the pages of a TIFF file lie.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "files/read_file.hpp"

namespace tambour {

/// The chain of image file directories, followed once: with it a page of a large file is reached directly.
struct TiffDirectories {
  std::vector<std::uint64_t> pages;  ///< offset of each directory that holds an image
  std::size_t left_out = 0;          ///< reduced-resolution copies and masks
  std::string broken;                ///< why the chain ends early; empty when it is whole
};

/// Throws Error(bad_input) when not even the first directory can be reached.
TiffDirectories read_tiff_directories(const ReadFile& file);

}  // namespace tambour
