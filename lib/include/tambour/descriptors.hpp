// Numbers that describe an image and do not change when it is rotated about its centre.
#pragma once

#include <complex>
#include <cstddef>
#include <span>
#include <string>
#include <vector>

#include "tambour/disk_basis.hpp"

namespace tambour {

enum class DescriptorKind {
  magnitude,  ///< a_0k with sign, |a_nk| for n >= 1
  gram        ///< a_0k with sign; root of a_nk conj(a_nl), k <= l: real parts, then imaginary parts for k < l
};

const char* to_string(DescriptorKind kind);

struct DescriptorOptions {
  DescriptorKind kind = DescriptorKind::gram;
  double bandlimit = 0.4;         ///< only terms with root <= pi R min(bandlimit, the basis' own)
  bool mirror_invariant = false;  ///< absolute value of every imaginary part

  std::vector<std::string> problems() const;
};

/// Computes descriptors for one basis.
///
/// Coefficients are divided by sqrt(E) first, E = energy of the terms used, so that brightness drops out; the constant
/// of a Neumann basis is left out. gram uses phi(z) = z / sqrt(|z|). An image without energy gives zeros. Immutable,
/// thread-safe. Relative change under an exact quarter turn: 1e-10 (double). Source: docs/mathematics.md.
class Descriptor {
 public:
  /// Throws Error(invalid_argument) on bad options, or when no term is under the band limit.
  Descriptor(const DiskBasis& basis, const DescriptorOptions& options);

  const DescriptorOptions& options() const noexcept { return options_; }
  std::size_t size() const noexcept { return size_; }
  /// One name per number, such as "a_0_3", "abs_2_1", "re_2_1_3", "im_2_1_3": order, then radial indices.
  std::vector<std::string> names() const;
  /// out.size() = size(). Throws Error(invalid_argument) on wrong sizes.
  void compute(std::span<const std::complex<double>> coefficients, std::span<double> out) const;

 private:
  DiskBasis basis_;
  DescriptorOptions options_;
  std::vector<std::size_t> first_;  // per order: index of its first term used
  std::vector<std::size_t> count_;  // per order: number of terms used
  std::size_t size_ = 0;
};

}  // namespace tambour
