// Images to coefficients: the band-limited integral over the disk.
#pragma once

#include <complex>
#include <map>
#include <vector>

#include "disk/gridding_kernel.hpp"
#include "disk/rings.hpp"
#include "disk/upsampling.hpp"
#include "fourier/buffer.hpp"
#include "fourier/plans.hpp"
#include "tambour/disk_basis.hpp"
#include "tambour/views.hpp"

namespace tambour::disk {

/// a_nk = sum over rings of weight c_nk J_n(root r / R) (2 pi / angles) sum over angles of F(r, theta) e^{-i n theta}.
template <class T>
class Analysis {
 public:
  Analysis(const DiskBasis& basis, int rows, int columns, double tolerance);

  struct Scratch {
    typename Upsampling<T>::Scratch upsampling;
    fourier::AlignedBuffer<T> nodes;                  // F on every ring, ring after ring
    fourier::AlignedBuffer<std::complex<T>> spectra;  // its transform over the angle
    std::vector<T> re, im;                            // the terms of one order
  };
  Scratch make_scratch() const;

  /// out: one value per term.
  void run(ImageView<const T> image, Centre centre, std::complex<T>* out, Scratch& scratch) const;

 private:
  void gather(const Scratch& scratch, T* nodes) const;
  Analysis(const DiskBasis& basis, int rows, int columns, double tolerance, double oversampling);
  void make_nodes();
  void make_matrices(const DiskBasis& basis);

  struct RingPlace {
    std::size_t node;      // first node in `nodes`, aligned
    std::size_t spectrum;  // first value in `spectra`, aligned
    std::size_t taps;      // first node in offset_, weights
  };

  GriddingKernel kernel_;
  Centre middle_;
  Upsampling<T> upsampling_;
  std::vector<Ring> rings_;
  std::vector<RingPlace> places_;
  std::size_t node_count_ = 0, spectrum_count_ = 0;
  std::map<int, fourier::ForwardFft<T>> fft_;  // by number of angles

  std::vector<std::ptrdiff_t> tap_offset_;  // per node
  std::vector<T> tap_weight_;               // per node: width along x, width along y

  std::vector<std::size_t> order_begin_;   // per order: its first term
  std::vector<int> first_ring_;            // per order: rings before it are negligible
  std::vector<std::size_t> matrix_begin_;  // per order
  std::vector<T> matrix_;                  // per order: rings from first_ring_ x terms, row-major
};

}  // namespace tambour::disk
