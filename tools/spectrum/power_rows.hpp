// Rotational power of images as rows of a table.
#pragma once

#include <cmath>
#include <optional>
#include <string>
#include <vector>

#include "common/csv_writer.hpp"
#include "tambour/spectrum.hpp"

namespace tambour::tools::spectrum {

/// Power of every order; with rings one entry per ring, else one entry for the whole disk.
using PowerTable = std::vector<std::vector<OrderPower>>;

/// Computes the table of one image. Immutable, thread-safe.
class PowerOfImage {
 public:
  /// `rings` 0: the whole disk.
  PowerOfImage(const DiskBasis& basis, int rings);

  PowerTable compute(std::span<const std::complex<double>> coefficients, const NoiseSpectrum& noise) const;
  std::vector<std::string> header() const;
  /// `label`: the first cell. Without `noise_known` the cells of the error and of the noise stay empty.
  void write(const std::string& label, const PowerTable& table, bool noise_known, CsvWriter& out) const;

 private:
  DiskBasis basis_;
  std::optional<RingSpectrum> rings_;
};

/// Mean over images; its error from those of the images, which are independent.
class MeanPower {
 public:
  void add(const PowerTable& table, bool noise_known);
  std::size_t images() const noexcept { return images_; }
  bool noise_known() const noexcept { return noise_known_; }
  PowerTable mean() const;

 private:
  PowerTable sum_;  // with the squared error in place of the error
  std::size_t images_ = 0;
  bool noise_known_ = true;
};

}  // namespace tambour::tools::spectrum
