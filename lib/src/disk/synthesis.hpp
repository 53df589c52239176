// Coefficients to images.
#pragma once

#include <complex>
#include <vector>

#include "disk/gridding_kernel.hpp"
#include "fourier/buffer.hpp"
#include "fourier/plans.hpp"
#include "tambour/disk_basis.hpp"
#include "tambour/views.hpp"

namespace tambour::disk {

/// The expansion on a regular polar grid, deconvolved so that a separable gather with the kernel gives its value at any
/// pixel.
///
/// Rings r_j = (j + 1/2) h, h = 1 / (sigma beta) px, continued through zero by f(-r, theta) = f(r, theta + pi). On
/// them, instead of J_n(root r / R), stands g = b_0 J_n + sum_m (b_m / 2) (J_{n+2m} + J_{n-2m}), b_m the cosine series
/// of 1 / phi^(h (root / R) sin t): the plane waves that make up J_n, each divided by the kernel's transform. Angles
/// are divided by the transform per order.
template <class T>
class Synthesis {
 public:
  Synthesis(const DiskBasis& basis, double tolerance);

  struct Scratch {
    fourier::AlignedBuffer<std::complex<T>> spectra;  // ring x order
    fourier::AlignedBuffer<T> rings;                  // ring x angle
    fourier::AlignedBuffer<T> padded;                 // the same with margins for the kernel
    std::vector<T> re, im;                            // one order on its rings
  };
  Scratch make_scratch() const;

  /// Pixels inside the disk get the expansion's value, the others 0.
  void run(const std::complex<T>* coefficients, Centre centre, ImageView<T> image, Scratch& scratch) const;

 private:
  void make_matrices(const DiskBasis& basis);
  void fill_rings(const std::complex<T>* coefficients, Scratch& scratch) const;
  void pad(Scratch& scratch) const;

  GriddingKernel kernel_;
  double radius_;
  double spacing_;  // h
  int rings_;
  int angles_;
  int margin_;  // rings and angles around the padded grid
  int padded_stride_;
  int spectrum_stride_, ring_stride_;
  fourier::BackwardFft<T> fft_;

  std::vector<std::size_t> order_begin_;
  std::vector<int> first_ring_;  // per order: rings before it are negligible
  std::vector<std::size_t> matrix_begin_;
  std::vector<T> matrix_;  // per order: terms x rings from first_ring_, row-major
};

}  // namespace tambour::disk
