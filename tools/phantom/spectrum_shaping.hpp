// Noise with a spectrum, and what a spectrum does to information.
#pragma once

#include <complex>
#include <vector>

#include "phantom/picture.hpp"
#include "phantom/random.hpp"

namespace tambour::tools::phantom {

/// Noise of unit variance per pixel, periodic in the frame, with the spectrum S(q) ~ 0.15 + 1 / (1 + (q / 0.5)^2),
/// q in radians per pixel. Immutable, thread-safe.
class ColouredNoise {
 public:
  ColouredNoise(std::ptrdiff_t rows, std::ptrdiff_t columns);

  Picture draw(Random& random) const;
  /// Sum over frequencies of |F(q)|^2 / S(q), F the unitary Fourier transform: what sum f^2 / variance is for white
  /// noise.
  double whitened_sum(const Picture& picture) const;

 private:
  std::ptrdiff_t rows_;
  std::ptrdiff_t columns_;
  std::vector<double> spectrum_;  // row-major, frequencies in the order of the transform
};

Picture white_noise(std::ptrdiff_t rows, std::ptrdiff_t columns, Random& random);

/// An isotropic Gaussian random field smoothed by a Gaussian of `sigma` px, that fades out between 0.7 R and 0.95 R.
Picture isotropic_field(std::ptrdiff_t rows, std::ptrdiff_t columns, Centre centre, double radius, double sigma,
                        Random& random);

}  // namespace tambour::tools::phantom
