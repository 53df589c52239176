// The polar nodes on which an image is integrated.
#pragma once

#include <vector>

#include "tambour/disk_basis.hpp"

namespace tambour::disk {

/// One circle of nodes, angles 2 pi a / count, a = 0 .. count - 1.
struct Ring {
  double radius;      ///< px
  double weight;      ///< of the radial quadrature, times the radius: integral f r dr = sum weight f
  int angles;         ///< 5-smooth multiple of 4, so that a quarter turn maps nodes to nodes
  int highest_order;  ///< orders above are negligible on this ring
};

/// Rings that integrate the product of an image (frequencies up to the corner of the square band, sqrt2 pi) and a term
/// (up to pi beta) over the disk to `tolerance`: Gauss-Legendre in the radius, and per ring the fewest angles whose
/// aliases stay below it.
std::vector<Ring> make_rings(const DiskBasis& basis, double tolerance);

}  // namespace tambour::disk
