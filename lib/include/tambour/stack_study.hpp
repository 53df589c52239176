// One pass over a stack: prepare, centre, expand, noise, symmetry; in batches, over all workers.
#pragma once

#include <complex>
#include <cstddef>
#include <functional>
#include <memory>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "tambour/centre.hpp"
#include "tambour/disk_transform.hpp"
#include "tambour/executor.hpp"
#include "tambour/image_source.hpp"
#include "tambour/noise.hpp"
#include "tambour/preparation.hpp"
#include "tambour/progress.hpp"
#include "tambour/spectrum.hpp"
#include "tambour/symmetry.hpp"

namespace tambour {

/// What a pass does. Every image is prepared, expanded at its centre, and its noise measured; the other stages run on
/// request.
struct StackStudyOptions {
  DiskGeometry geometry{.bandlimit = 0.8};
  PreparationOptions preparation;
  bool find_centres = true;  ///< else the given centres or the frame's middle are used
  double search = 4;         ///< see CentreOptions
  bool double_precision = false;
  double tolerance = 0;  ///< see DiskTransformOptions
  bool test_symmetry = true;
  SymmetryOptions symmetry;
  std::size_t batch = 0;  ///< images held at once; 0 = 16 per worker

  std::vector<std::string> problems() const;
};

/// What became of one image. Parts whose stage did not run keep their defaults.
struct ImageStudy {
  std::size_t image = 0;
  std::string source;
  ImageStatus status;
  PreparedImage prepared;
  CentreEstimate centre;
  NoiseSpectrum noise;
  double noise_sd = 0;
  std::vector<OrderPower> spectrum;  ///< rotational power, noise subtracted
  double signal_to_noise = 0;        ///< variance of the signal inside the disk / variance of the noise; at least 0
  std::optional<SymmetryEvidence> evidence;
};

/// One batch, in the order of the stack; views are valid during the call only.
struct StudyBatch {
  std::size_t first = 0;  ///< index of its first image
  std::vector<ImageStudy> images;
  StackView<const double> prepared;                     ///< images after preparation (undefined for skipped ones)
  MatrixView<const std::complex<double>> coefficients;  ///< images x terms; zeros for skipped ones
};

/// Plans everything that images of one size share, then runs over a source.
///
/// Results depend neither on the executor nor on the batch. Memory is bounded by the batch, not by the stack.
/// Throws Error(invalid_argument) on bad options, Error(interrupted) when the progress sink asks to stop.
class StackStudyPlan {
 public:
  StackStudyPlan(const StackStudyOptions& options, std::ptrdiff_t rows, std::ptrdiff_t columns, Executor& executor);
  ~StackStudyPlan();

  const StackStudyOptions& options() const noexcept;
  const DiskBasis& basis() const noexcept;
  double tolerance() const noexcept;         ///< of the transform, with the default filled in
  bool noise_from_outside() const noexcept;  ///< see NoiseEstimator::uses_outside()
  /// Expansion to image, at any centre; pixels outside the disk are 0. Shapes: coefficients (terms), out (rows x
  /// columns).
  void rebuild(std::span<const std::complex<double>> coefficients, Centre centre, ImageView<double> out) const;
  /// Null unless `test_symmetry`.
  const SymmetryTest* symmetry_test() const noexcept;

  /// `centres`: one per image of the source, or empty; with find_centres they must be empty. `given_status`: empty, or
  /// one per image: an image whose entry is not ok is skipped with that reason. Batches arrive in order, from the
  /// calling thread.
  void run(const ImageSource& source, std::span<const Centre> centres, std::span<const ImageStatus> given_status,
           Executor& executor, ProgressSink& progress, const std::function<void(const StudyBatch&)>& take_batch) const;

 private:
  struct Data;
  std::unique_ptr<const Data> data_;
};

}  // namespace tambour
