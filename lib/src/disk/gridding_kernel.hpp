// The Kaiser-Bessel kernel that carries values between a regular grid and scattered points.
#pragma once

#include <vector>

namespace tambour::disk {

/// phi(t) = I_0(b sqrt(1 - (2 t / w)^2)) / I_0(b) for |t| < w / 2 in grid steps, b = 0.995 pi w (1 - 1 / (2 sigma)).
///
/// On a grid that is sigma times finer than the content needs, sum_j g_j phi(u - j) with g deconvolved by transform()
/// returns the content at u, up to an error that falls with w.
class GriddingKernel {
 public:
  /// width w in 4 .. 16 grid points, oversampling sigma in [1.25, 4].
  GriddingKernel(int width, double oversampling);

  /// The narrowest kernel that keeps a transform to `tolerance` (1e-12 .. 1e-2) at this oversampling (1.5 .. 2).
  static GriddingKernel for_tolerance(double tolerance, double oversampling);

  int width() const noexcept { return width_; }
  /// phi(t).
  double value(double t) const;
  /// integral phi(t) e^{-i omega t} dt, omega in radians per grid step.
  double transform(double omega) const;

  /// First of the width() grid points that reach u.
  static int first_point(double u, int width);
  /// out[i] = phi(u - first_point - i) for i < width(): a polynomial per tap, error under 1e-14.
  template <class T>
  void weights(double u, T* out) const;

 private:
  int width_;
  double shape_;                      // b
  std::vector<double> coefficients_;  // degree x tap, highest degree first
  int degree_;
};

}  // namespace tambour::disk
