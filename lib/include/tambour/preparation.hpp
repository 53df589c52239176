// What is done to an image before it is expanded: contrast sign, background, normalisation.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "tambour/disk_basis.hpp"
#include "tambour/status.hpp"
#include "tambour/views.hpp"

namespace tambour {

/// Background that is fitted outside the disk and subtracted everywhere.
enum class Background {
  none,
  constant,  ///< degree 0
  linear,    ///< degree 1
  quadratic  ///< degree 2
};

/// How values are scaled after the background is gone.
enum class Scaling {
  none,       ///< image units stay
  outside_sd  ///< divided by the standard deviation outside the disk
};

const char* to_string(Background background);
const char* to_string(Scaling scaling);

/// Options shared by every tool and written into every output.
struct PreparationOptions {
  Background background = Background::quadratic;
  Scaling scaling = Scaling::none;
  bool invert_contrast = false;  ///< multiply by -1 first, for dark objects on a bright field

  /// True when pixels outside the disk are needed.
  bool needs_outside() const noexcept;
};

/// What was taken away from one image.
struct PreparedImage {
  ImageStatus status;
  /// Coefficients of 1, u, v, u^2, u v, v^2 with u = (x - cx) / R, v = (y - cy) / R, in image units; unused ones are 0.
  double background[6] = {};
  double outside_sd = 0;  ///< standard deviation of the residual on the fitted pixels; 0 when there are none
};

/// Prepares images of one size around one disk. Immutable, thread-safe.
///
/// The background polynomial is a least-squares fit on the pixels with R < r < 1.3 R (centre: given per call).
/// Throws Error(invalid_argument) when a background or scaling is asked for and fewer than 20 pixels
/// of the frame lie in that ring around the frame's middle. Images with NaN or infinite pixels and constant images get
/// their reason.
class Preparation {
 public:
  Preparation(const PreparationOptions& options, std::ptrdiff_t rows, std::ptrdiff_t columns, double radius);

  const PreparationOptions& options() const noexcept { return options_; }
  /// True when enough pixels lie outside a disk in the frame's middle for a background or a scale.
  static bool possible(std::ptrdiff_t rows, std::ptrdiff_t columns, double radius);
  /// Pixels of the frame in the ring that the background is fitted on.
  static std::size_t outside_pixels(std::ptrdiff_t rows, std::ptrdiff_t columns, double radius);

  /// Works in place.
  PreparedImage apply(ImageView<double> image, Centre centre) const;

 private:
  PreparationOptions options_;
  std::ptrdiff_t rows_;
  std::ptrdiff_t columns_;
  double radius_;
};

}  // namespace tambour
