// The radius of the round things in a stack, when nobody says it.
#pragma once

#include <cstddef>
#include <vector>

#include "tambour/disk_basis.hpp"
#include "tambour/executor.hpp"
#include "tambour/image_source.hpp"

namespace tambour {

/// A disk radius with what it was taken from.
struct RadiusEstimate {
  double radius = 0;       ///< pixels, a whole number
  std::size_t images = 0;  ///< that were looked at
  bool object_ends =
      false;  ///< true: the signal fades inside the frame; false: the largest disk that the search allows
  std::vector<double>
      excess;  ///< mean squared deviation above the rim's level, per pixel of radius, relative to its largest
};

/// Radius that holds the objects of a stack: where the mean squared deviation from the rim's level, averaged over up to
/// 256 images spread over the stack and over the angle about the frame's middle, has fallen to a twentieth of its
/// largest, plus 3 px for the objects' own offsets. At least 4 px, at most what leaves room for `search` pixels around
/// the frame's middle.
///
/// Throws Error(bad_input) when no image can be read or the frame is too small for any disk (a side under 2 (4 +
/// search) px), Error(invalid_argument) when search is negative.
RadiusEstimate estimate_radius(const ImageSource& source, double search, Executor& executor);

}  // namespace tambour
