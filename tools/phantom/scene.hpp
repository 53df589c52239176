// A scene of Gaussian blobs and one ring, and its derivatives with respect to the position.
#pragma once

#include <vector>

#include "phantom/picture.hpp"
#include "tambour/disk_basis.hpp"

namespace tambour::tools::phantom {

/// Place relative to the centre in polar coordinates; sigma in px.
struct Blob {
  double r;
  double theta;
  double sigma;
  double amplitude;
};

/// amplitude exp(-(r - radius)^2 / (2 sigma^2)).
struct Annulus {
  double radius;
  double sigma;
};

/// A picture with its derivatives along x and y.
struct Drawing {
  Drawing(std::ptrdiff_t rows, std::ptrdiff_t columns)
      : value(rows, columns), along_x(rows, columns), along_y(rows, columns) {}

  void scale(double factor);
  void add(double factor, const Drawing& other);

  Picture value;
  Picture along_x;
  Picture along_y;
};

/// Adds to the drawing.
void draw(const std::vector<Blob>& blobs, Centre centre, Drawing& drawing);
void draw(const Annulus& annulus, Centre centre, Drawing& drawing);

}  // namespace tambour::tools::phantom
