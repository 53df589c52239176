// Rotational power: how much of an image lies in each angular order, and at which radius.
#pragma once

#include <complex>
#include <cstddef>
#include <memory>
#include <span>
#include <vector>

#include "tambour/disk_basis.hpp"
#include "tambour/noise.hpp"

namespace tambour {

/// d |a_nk|^2 / v_nk per term: d = 1 for n = 0, 2 above. White noise of variance s^2 gives d s^2 on average.
std::vector<double> raw_energies(const DiskBasis& basis, std::span<const std::complex<double>> coefficients);

/// Power of one angular order, both signs of n together, in image units squared times px^2.
struct OrderPower {
  int angular_order = 0;
  double power = 0;        ///< noise subtracted; may be negative within its error
  double se = 0;           ///< standard error, with the error of the noise spectrum
  double noise_power = 0;  ///< what the noise alone contributes, already subtracted
};

/// P_n = sum_k (e_nk - d S(lambda_nk)) for every order of the basis; without a noise spectrum S = 0 and se = 0.
std::vector<OrderPower> rotational_spectrum(const DiskBasis& basis, std::span<const std::complex<double>> coefficients,
                                            const NoiseSpectrum& noise);

/// The same per ring of radius: the integral of |f_n|^2 over ring_inner <= r < ring_outer, rings of equal width from 0
/// to R.
///
/// Immutable, thread-safe. Throws Error(invalid_argument) unless 1 <= rings <= 512.
class RingSpectrum {
 public:
  RingSpectrum(const DiskBasis& basis, int rings);
  ~RingSpectrum();

  int rings() const noexcept;
  double inner(int ring) const;
  double outer(int ring) const;
  /// result[ring][order].
  std::vector<std::vector<OrderPower>> compute(std::span<const std::complex<double>> coefficients,
                                               const NoiseSpectrum& noise) const;

 private:
  struct Data;
  std::unique_ptr<const Data> data_;
};

}  // namespace tambour
