// Images with known truth, one at a time; image i is the same whatever was made before it.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "phantom/complex.hpp"
#include "phantom/kind.hpp"
#include "phantom/picture.hpp"
#include "phantom/spectrum_shaping.hpp"

namespace tambour::tools::phantom {

enum class Noise { none, white, coloured };

struct GeneratorOptions {
  std::ptrdiff_t rows = 64;
  std::ptrdiff_t columns = 64;
  double radius = 24;
  std::vector<Kind> mix;
  double snr = 0.5;            ///< variance of the signal over the disk / variance of the noise per pixel
  Noise noise = Noise::white;  ///< of standard deviation 1; with `none` the signal has unit variance
  double centre_spread = 2;    ///< px
  double gradient = 0;         ///< root mean square as a share of the signal's
  double contaminant = 0;      ///< the same
  bool vary = false;           ///< parameters of the assembly drawn per image, not once per kind
  std::uint64_t seed = 1;
};

/// What is known of one image. Empty where there is nothing to know.
struct Truth {
  std::string kind;
  std::optional<int> fold;
  std::optional<Centre> centre;
  std::optional<double> angle;        ///< degrees in [0, 360 / fold)
  std::optional<double> information;  ///< Fisher information on the centre per axis, 1/px^2
};

/// Immutable, thread-safe.
class Generator {
 public:
  /// Throws Error(invalid_argument) when a disk within centre_spread of the frame's middle would leave the frame.
  explicit Generator(const GeneratorOptions& options);

  Picture make(std::size_t image, Truth& truth) const;

 private:
  const Kind& kind_of(double draw) const;
  Drawing signal(const Kind& kind, std::size_t image, Centre centre, double turn) const;
  double information(const Drawing& drawing) const;

  GeneratorOptions options_;
  std::vector<Complex> complexes_;  // one per kind
  std::optional<ColouredNoise> coloured_;
};

}  // namespace tambour::tools::phantom
