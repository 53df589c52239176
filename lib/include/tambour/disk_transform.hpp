// Images to Fourier-Bessel coefficients on a disk and back.
#pragma once

#include <complex>
#include <memory>
#include <span>
#include <string>
#include <vector>

#include "tambour/disk_basis.hpp"
#include "tambour/executor.hpp"
#include "tambour/status.hpp"
#include "tambour/views.hpp"

namespace tambour {

/// What fixes a DiskTransform.
struct DiskTransformOptions {
  DiskGeometry geometry;
  std::ptrdiff_t rows = 0;     ///< of every image; 8 .. 16384
  std::ptrdiff_t columns = 0;  ///< of every image; 8 .. 16384
  /// Wanted error, max |da| / max |a| over all terms. 0 = 1e-6 (float) or 1e-12 (double). Float 1e-6 .. 1e-2, double
  /// 1e-12 .. 1e-2.
  double tolerance = 0;

  /// Everything that is wrong, one sentence each; empty if nothing is.
  std::vector<std::string> problems() const;
};

/// Plan for images of one size on a disk of one radius; every image may have its own sub-pixel centre.
///
/// Analysis:   a_nk = integral over the disk of F conj(psi_nk), F = the cosine interpolant of the image (half-sample
///             mirror, DCT-II); exact for that F up to the tolerance.
/// Synthesis:  f = sum_k a_0k psi_0k + 2 Re sum_{n>0,k} a_nk psi_nk at the pixel centres inside the disk, 0 outside.
///
/// Shapes: images (images x rows x columns) of T; coefficients (images x terms) in the order of basis().terms().
/// T = float or double. Immutable once built and cheap to copy (shared); const functions may run in many threads at
/// once with one Workspace each. Results depend neither on batch size nor on thread count. Throws
/// Error(invalid_argument) on options out of range and on views of the wrong shape; never for one bad image. Cost:
/// building some 0.1 s at 96 px (double); running: docs/performance.md. Source: docs/mathematics.md.
template <class T>
class DiskTransform {
 public:
  using Complex = std::complex<T>;

  /// Scratch memory of one thread. Movable; usable with every copy of the plan that made it.
  class Workspace {
   public:
    Workspace(Workspace&&) noexcept;
    Workspace& operator=(Workspace&&) noexcept;
    ~Workspace();

   private:
    friend class DiskTransform;
    struct State;
    explicit Workspace(std::unique_ptr<State> state);
    std::unique_ptr<State> state_;
  };

  explicit DiskTransform(const DiskTransformOptions& options);

  const DiskBasis& basis() const noexcept;
  const DiskTransformOptions& options() const noexcept;  ///< with the tolerance filled in
  Workspace make_workspace() const;

  /// `centres`: one per image, or empty for the middle of the frame. `statuses`: one per image. An image with NaN or
  /// infinite pixels, or whose disk leaves the frame, gets its reason and a row of zeros.
  void analyse(StackView<const T> images, std::span<const Centre> centres, MatrixView<Complex> coefficients,
               std::span<ImageStatus> statuses, Workspace& workspace) const;

  /// The same with the images spread over the executor's workers.
  void analyse(StackView<const T> images, std::span<const Centre> centres, MatrixView<Complex> coefficients,
               std::span<ImageStatus> statuses, Executor& executor) const;

  /// The disk may leave the frame: only pixels of the frame are written. The imaginary part of order 0 is ignored.
  void synthesise(MatrixView<const Complex> coefficients, std::span<const Centre> centres, StackView<T> images,
                  Workspace& workspace) const;

  void synthesise(MatrixView<const Complex> coefficients, std::span<const Centre> centres, StackView<T> images,
                  Executor& executor) const;

 private:
  void check_shapes(std::ptrdiff_t images, std::ptrdiff_t rows, std::ptrdiff_t columns, std::size_t centres,
                    std::ptrdiff_t coefficient_rows, std::ptrdiff_t coefficient_columns) const;
  void analyse_one(ImageView<const T> image, Centre centre, Complex* out, ImageStatus& status,
                   Workspace& workspace) const;

  struct Plan;
  std::shared_ptr<const Plan> plan_;
};

extern template class DiskTransform<float>;
extern template class DiskTransform<double>;

/// Why a disk does not fit into a frame (-0.5 <= centre - R, centre + R <= size - 0.5), or ok.
ImageStatus disk_in_frame(Centre centre, double radius, std::ptrdiff_t rows, std::ptrdiff_t columns);

}  // namespace tambour
