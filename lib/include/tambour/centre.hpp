// The rotation centre of an image, without knowing its symmetry.
#pragma once

#include <cstddef>
#include <memory>
#include <string>
#include <vector>

#include "tambour/disk_basis.hpp"
#include "tambour/noise.hpp"
#include "tambour/status.hpp"
#include "tambour/views.hpp"

namespace tambour {

struct CentreOptions {
  DiskGeometry geometry{.bandlimit = 0.8};
  std::ptrdiff_t rows = 0;
  std::ptrdiff_t columns = 0;
  double search = 4;  ///< whole pixels to look at on each side of the frame's middle, 1 .. 64; cut where the disk would
                      ///< leave the frame

  std::vector<std::string> problems() const;
};

/// A centre with the covariance of its error in px^2.
struct CentreEstimate {
  Centre centre;
  double var_x = 0;
  double var_y = 0;
  double cov_xy = 0;
  bool at_search_limit = false;  ///< the best place lies on the border of the searched square: it may lie beyond
};

/// Maximises P0(c) = sum_k w_k (f * psi_0k)(c)^2, w_k = exp(-(lambda_0k / (0.45 lambda_max))^2 / 2): first over whole
/// pixels, then a parabola through three points per axis, at most 0.7 px from the best pixel.
///
/// f is continued periodically and taken as band-limited; disks in the frame never meet the continuation.
/// Measured errors: docs/accuracy.md. Immutable, thread-safe. Throws Error(invalid_argument) on bad options, or when
/// the disk leaves no whole pixel to search.
class CentreFinder {
 public:
  explicit CentreFinder(const CentreOptions& options);
  ~CentreFinder();

  /// The covariance stays 0.
  CentreEstimate find(ImageView<const double> image) const;

  /// Fills in the covariance from the curvature of P0 and the noise: Cov = I^-1 V I^-1, I = -(second derivatives of P0)
  /// / 2, V the variance of half its gradient. Where P0 has no maximum in some direction the error is that of the
  /// searched square.
  void add_covariance(CentreEstimate& estimate, ImageView<const double> image, const NoiseSpectrum& noise) const;

 private:
  struct Data;
  std::unique_ptr<const Data> data_;
};

}  // namespace tambour
