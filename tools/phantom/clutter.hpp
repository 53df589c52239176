// What spoils real images: an uneven background and a neighbour that reaches into the disk.
#pragma once

#include "phantom/picture.hpp"
#include "phantom/random.hpp"

namespace tambour::tools::phantom {

/// 2 x a slope in a random direction + 0.6 x an astigmatic saddle + 0.4 x a bowl, in units of R; root mean square over
/// the disk (without its mean) = 1.
Picture gradient(std::ptrdiff_t rows, std::ptrdiff_t columns, Centre centre, double radius, Random& random);

/// Three blobs of 1.3 to 2.5 px within 2.5 px of a place at 0.6 to 0.95 R; root mean square over the disk (without its
/// mean) = 1.
Picture contaminant(std::ptrdiff_t rows, std::ptrdiff_t columns, Centre centre, double radius, Random& random);

}  // namespace tambour::tools::phantom
