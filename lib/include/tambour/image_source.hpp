// Where images come from: the interface between the rooms that study images and the one that reads files.
#pragma once

#include <cstddef>
#include <string>

#include "tambour/status.hpp"
#include "tambour/views.hpp"

namespace tambour {

/// Size of a pixel in a physical unit; value 0 when the file does not tell.
struct PixelSize {
  double value = 0;
  std::string unit;  ///< "angstrom", "nanometre", "micrometre", …; empty when unknown

  bool known() const noexcept { return value > 0; }
};

/// A stack of images of one size, read one at a time.
class ImageSource {
 public:
  virtual ~ImageSource() = default;

  virtual std::size_t images() const noexcept = 0;
  virtual std::ptrdiff_t rows() const noexcept = 0;
  virtual std::ptrdiff_t columns() const noexcept = 0;
  virtual PixelSize pixel_size() const = 0;

  /// Where an image lies, for tables and messages: the file, with `#page` when the file holds several (from 0).
  virtual std::string name(std::size_t image) const = 0;

  /// Reads one image into `out` (rows x columns). A bad image gives its reason and leaves `out` undefined: truncated,
  /// of another size, unreadable. NaN and infinite pixels are passed on. Thread-safe.
  /// Throws Error(invalid_argument) when the index or the shape of `out` is wrong.
  virtual ImageStatus read(std::size_t image, ImageView<double> out) const = 0;
};

}  // namespace tambour
