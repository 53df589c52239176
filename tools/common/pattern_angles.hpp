// Angles of patterns, once the fold of every image is known.
#pragma once

#include <complex>
#include <cstddef>
#include <map>
#include <optional>
#include <vector>

#include "tambour/stack_study.hpp"
#include "tambour/symmetry.hpp"

namespace tambour::tools {

/// Keeps, of every image with a supported fold N, the coefficients of order N; angles() then lines up the images of
/// each fold with one another. Memory: some tens of numbers an image.
class PatternAngles {
 public:
  explicit PatternAngles(const DiskBasis& basis) : basis_(basis) {}

  void add(const ImageStudy& study, const std::complex<double>* coefficients);
  /// One angle per image that was added.
  std::map<std::size_t, PatternAngle> angles() const;

 private:
  struct Kept {
    std::size_t image;
    std::vector<std::complex<double>> order;
    NoiseSpectrum noise;
  };

  std::vector<std::complex<double>> spread_out(const Kept& kept, int fold) const;

  DiskBasis basis_;
  std::map<int, std::vector<Kept>> of_fold_;
};

}  // namespace tambour::tools
