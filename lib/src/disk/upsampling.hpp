// The cosine interpolant of an image, on a finer grid.
#pragma once

#include <vector>

#include "disk/gridding_kernel.hpp"
#include "fourier/buffer.hpp"
#include "fourier/plans.hpp"
#include "tambour/disk_basis.hpp"
#include "tambour/views.hpp"

namespace tambour::disk {

/// One axis of the fine grid: `size` image samples become `fine_size` ones per period, of which the window `first` ..
/// `first + count - 1` is made (it may reach over the ends, where the interpolant continues as its mirror image).
struct FineAxis {
  FineAxis(int image_size, double oversampling, double centre, double reach, const GriddingKernel& kernel);

  int size;
  int fine_size;
  int first;
  int count;
  std::vector<double> deconvolution;  ///< 1 / (2 size phi^(omega_p)), p < size

  /// Fine index of an image coordinate: (x + 1/2) fine_size / size - 1/2.
  double fine(double x) const { return (x + 0.5) * fine_size / size - 0.5; }
};

/// Makes the fine grid that a separable gather with the kernel turns into F(x + shift_x, y + shift_y).
///
/// Along each axis F(x + d) = (1/2N) [Y_0 + 2 sum_p Y_p (cos(pi p d / N) cos(pi p (x + 1/2) / N) - sin(pi p d / N)
/// sin(…))], Y the DCT-II, so every image may have its own sub-pixel centre while the nodes stay where they are.
template <class T>
class Upsampling {
 public:
  /// The disk of `reach` pixels around the frame's middle is covered.
  Upsampling(int rows, int columns, double reach, double oversampling, const GriddingKernel& kernel);
  Upsampling(const Upsampling&) = delete;  // the passes point at the axes
  Upsampling& operator=(const Upsampling&) = delete;

  const FineAxis& x_axis() const noexcept { return x_; }
  const FineAxis& y_axis() const noexcept { return y_; }
  /// The fine grid is row-major: element (i, j) of the windows in x and y at j * row_stride() + i.
  int row_stride() const noexcept { return fine_stride_; }

  struct Scratch {
    fourier::AlignedBuffer<T> lines, spectrum, cosine_in, sine_in, cosine_out, sine_out, middle, fine;
  };
  Scratch make_scratch() const;

  /// Result in scratch.fine.
  void run(ImageView<const T> image, double shift_x, double shift_y, Scratch& scratch) const;

 private:
  /// One pass over all lines of an axis, which also transposes: (line, fine index i) is written to out[i * out_stride +
  /// line].
  struct Pass {
    fourier::LineTransform<T> forward, cosine, sine;
    const FineAxis* axis;
    int lines, in_stride, spectrum_stride, fine_stride;
  };
  Pass make_pass(const FineAxis& axis, int lines) const;
  void run_pass(const Pass& pass, double shift, T* in, T* out, int out_stride, Scratch& scratch) const;

  FineAxis x_, y_;
  int middle_stride_, fine_stride_;
  Pass along_x_, along_y_;
};

}  // namespace tambour::disk
