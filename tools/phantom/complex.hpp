// The invented assembly: N subunits of two Gaussian blobs each, on a faint ring.
#pragma once

#include <vector>

#include "phantom/kind.hpp"
#include "phantom/random.hpp"
#include "phantom/scene.hpp"

namespace tambour::tools::phantom {

/// What one assembly looks like, whatever its pose.
struct Complex {
  double r1;  ///< radius of the first blob of a subunit, px; also of the ring
  double s1;  ///< its width, px
  double r2;  ///< the same of the second blob
  double s2;
  double offset;      ///< angle of the second blob from the first, as a share of the subunits' spacing
  double amplitude;   ///< of the second blob; the first has 1
  double ring_share;  ///< share of the variance that the ring has
};

/// All uniform: r1 in .45 .. .65 R, s1 in 1.4 .. 2 px, r2 - r1 in -.12 .. .18 R, s2 in 1.2 .. 1.8 px, offset .15 ..
/// .35, amplitude .5 .. .8, ring_share .3 .. .6.
Complex draw_complex(double radius, Random& random);

/// Blobs of one image of a kind with a pattern; subunit 0 stands at angle `turn`. `random`: the damage and the
/// places of kinds that have some.
std::vector<Blob> arrange(const Kind& kind, const Complex& complex, double radius, double turn, Random& random);

}  // namespace tambour::tools::phantom
