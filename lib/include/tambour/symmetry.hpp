// Which rotational symmetry an image shows, and how surely.
#pragma once

#include <complex>
#include <cstddef>
#include <cstdint>
#include <memory>
#include <span>
#include <string>
#include <vector>

#include "tambour/disk_basis.hpp"
#include "tambour/executor.hpp"
#include "tambour/noise.hpp"

namespace tambour {

/// What is said of an image. `symmetric` needs a test against chance arrangements as well and is not given by this
/// version.
enum class Verdict {
  best_supported,  ///< more than noise; this fold explains it best, a chance arrangement is not excluded
  inconclusive,
  skipped
};

const char* to_string(Verdict verdict);

struct SymmetryOptions {
  int first_fold = 2;      ///< 2 .. 120
  int last_fold = 24;      ///< first_fold .. 120
  double alpha = 0.01;     ///< p_noise below this gives best_supported; 1e-4 .. 0.1
  int images = 1;          ///< energies are sums over this many images, 1 .. 1e6
  int draws = 20000;       ///< of the null distribution, 2000 .. 1e6
  std::uint64_t seed = 1;  ///< of the draws

  std::vector<std::string> problems() const;
};

struct SymmetryEvidence {
  int fold = 0;        ///< N^, the fold with the largest Bayes factor
  double ln_bf = 0;    ///< its ln Bayes factor against no symmetry
  double p_noise = 1;  ///< chance of such evidence from noise or isotropic texture alone; not calibrated above 0.1
  double visibility =
      0;  ///< nu: energy above noise in the harmonics of N^; 35 gives even odds of detection, 80 four in five
  double posterior = 0;  ///< probability of N^ with prior 1/2 on no symmetry and 1/2 shared by all folds
  Verdict verdict = Verdict::inconclusive;
  std::vector<double> ln_bf_of_fold;  ///< for first_fold .. last_fold
};

/// The N-fold test on energies whitened by the noise spectrum.
///
/// ln BF_N(A, L) = sum_j [ -d_jN/2 ln(1 + t_j) - D_j/2 ln(1 - h_jN t_j / (1 + t_j)) ], t_j = A exp(-(lambda_j / (L
/// lambda_max))^2 / 2), h_jN the share of shell j's energy in orders that are multiples of N; averaged over a grid of A
/// and L. The scale of each shell is integrated out, so the null law does not depend on the spectrum. Orders n >= 2
/// only. Immutable, thread-safe. Building draws the null law (some seconds at R = 40 on one core; give an executor).
/// Throws Error(invalid_argument) on bad options, or when the highest fold exceeds the basis' highest order. Source:
/// docs/mathematics.md.
class SymmetryTest {
 public:
  SymmetryTest(const DiskBasis& basis, const SymmetryOptions& options, Executor& executor);
  ~SymmetryTest();

  const SymmetryOptions& options() const noexcept;
  const Shells& shells() const noexcept;

  /// Energy per shell and order of one image, whitened: E_nj = sum over terms of e_nk / S(lambda_nk). Row-major shells
  /// x (max_order+1).
  std::vector<double> whitened(std::span<const double> raw_energies, const NoiseSpectrum& noise) const;
  /// `energies`: whitened, summed over options().images images.
  SymmetryEvidence evaluate(std::span<const double> energies) const;

 private:
  struct Data;
  std::unique_ptr<const Data> data_;
};

/// Angle of an N-fold pattern, in degrees in [0, 360 / N).
struct PatternAngle {
  double angle = 0;
  double se = 0;
};

/// angle = -arg(sum_k conj(g_k) a_Nk) / N; se from the noise that reaches the sum. `weights` has one entry per term of
/// order N. A larger angle is the same pattern turned so that theta grows (clockwise on a screen).
PatternAngle pattern_angle(const DiskBasis& basis, int fold, std::span<const std::complex<double>> coefficients,
                           std::span<const std::complex<double>> weights, const NoiseSpectrum& noise);

/// Collects order N of many images and gives the weights g_k for pattern_angle: the leading eigenvector of the
/// noise-weighted sum of a_N a_N^H, so that images of one kind line up; its largest component is made real and
/// positive. Not thread-safe.
class AngleReference {
 public:
  AngleReference(const DiskBasis& basis, int fold);
  void add(std::span<const std::complex<double>> coefficients, const NoiseSpectrum& noise);
  /// Zeros when nothing was added.
  std::vector<std::complex<double>> weights() const;

 private:
  DiskBasis basis_;
  int fold_;
  std::vector<std::complex<double>> sum_;  // terms of order N squared, row-major, whitened
  std::vector<double> noise_sd_;           // per term, summed over the images
};

}  // namespace tambour
