// What kinds of image a stack is mixed from.
#pragma once

#include <string>
#include <vector>

namespace tambour::tools::phantom {

enum class Shape {
  ring,       ///< N equal subunits, evenly spaced
  broken,     ///< a ring that lost a run of subunits and whose others are displaced
  scattered,  ///< N subunits at random angles on the ring
  blobs,      ///< 2 N blobs anywhere
  field,      ///< isotropic random texture
  noise       ///< nothing but noise
};

struct Kind {
  std::string name;  ///< as the user wrote it, such as "ring:12"
  Shape shape = Shape::ring;
  int subunits = 0;
  double share = 1;  ///< of the images; shares of a mix sum to 1

  /// True when the image has a centre and a pattern to turn.
  bool has_pattern() const noexcept { return shape != Shape::field && shape != Shape::noise; }
  /// N for a ring, 1 for what has no symmetry.
  int fold() const noexcept { return shape == Shape::ring ? subunits : 1; }
};

/// "ring:12=0.45,broken:12=0.55"; shares are divided by their sum, a missing one is 1.
/// Throws Error(invalid_argument) naming the part that is wrong.
std::vector<Kind> parse_mix(const std::string& text);

}  // namespace tambour::tools::phantom
