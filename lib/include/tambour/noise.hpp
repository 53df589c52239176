// The noise of an image, as seen by the terms of a disk expansion.
#pragma once

#include <cstddef>
#include <memory>
#include <string>
#include <vector>

#include "tambour/disk_basis.hpp"
#include "tambour/status.hpp"
#include "tambour/views.hpp"

namespace tambour {

/// Variance of the noise per real degree of freedom, S(lambda), for lambda = spatial frequency times 2 pi R.
/// Interpolated linearly in log S between its nodes, constant beyond them. White noise of variance s^2 has S = s^2.
struct NoiseSpectrum {
  std::vector<double> root;      ///< nodes lambda_j, ascending
  std::vector<double> variance;  ///< S at the nodes, > 0

  bool empty() const noexcept { return root.empty(); }
  double at(double lambda) const;
  /// Square root of the mean of S over the disk of frequencies below `limit`: the noise_sd of the tables.
  double sd(double limit) const;
};

/// Terms grouped by root into shells of width pi, merged until each holds enough degrees of freedom (orders n >= 2
/// only, since a centre error feeds n = 1 and the background n = 0).
struct Shells {
  std::vector<double> lower;      ///< lower edge of shell j in lambda; lower[shells] = above every root
  std::vector<double> mean_root;  ///< mean of the roots in the shell, weighted by degrees of freedom
  /// degrees_of_freedom[j][n]: real ones of order n in shell j, over both signs of n; 0 for n < 2.
  std::vector<std::vector<double>> degrees_of_freedom;
  std::vector<int> of_term;  ///< shell of every term with n >= 2, else -1

  std::size_t size() const noexcept { return mean_root.size(); }
  /// Sum over all orders.
  double total(std::size_t shell) const;
};

Shells make_shells(const DiskBasis& basis);

/// Estimates S(lambda) from what lies outside the disk.
///
/// P(q) = |FFT(w (f - mean_w f))|^2 / sum w^2 with w rising smoothly from 0 at R + 0.5 px to 1 at R + 4.5 px, averaged
/// over rings in q that match the shells, smoothed over neighbours. Where the frame holds too little outside (sum w^2
/// under 200), from the terms with n > 0.8 lambda instead, which an object inside 0.8 R does not reach. Measured on
/// white noise, R = 24, box 64: bias under 0.03, standard deviation 0.11 of S per image. docs/accuracy.md. Immutable,
/// thread-safe.
class NoiseEstimator {
 public:
  NoiseEstimator(const DiskBasis& basis, std::ptrdiff_t rows, std::ptrdiff_t columns);
  ~NoiseEstimator();

  /// True when the frame has enough pixels outside a disk in its middle to measure the noise there.
  bool uses_outside() const noexcept;
  const Shells& shells() const noexcept;

  /// `image`: prepared (background subtracted), rows x columns. `energies`: raw energy per term, d |a|^2 / v, in the
  /// order of the basis; used only where the outside is too small.
  NoiseSpectrum estimate(ImageView<const double> image, Centre centre, const std::vector<double>& energies) const;

 private:
  struct Data;
  std::unique_ptr<const Data> data_;
};

/// Mean of spectra at the nodes of the first. Empty ones are left out.
NoiseSpectrum mean_spectrum(const std::vector<NoiseSpectrum>& spectra);

}  // namespace tambour
