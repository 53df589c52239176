// The coefficient file: HDF5, laid out as docs/file-formats.md says.
#pragma once

#include <complex>
#include <cstddef>
#include <memory>
#include <string>
#include <vector>

#include "tambour/disk_basis.hpp"
#include "tambour/image_source.hpp"
#include "tambour/preparation.hpp"
#include "tambour/provenance.hpp"
#include "tambour/views.hpp"

namespace tambour {

/// What holds for the whole file.
struct CoefficientHeader {
  DiskGeometry geometry;
  std::ptrdiff_t rows = 0;
  std::ptrdiff_t columns = 0;
  bool double_precision = false;  ///< type of the stored coefficients
  double tolerance = 0;           ///< of the transform that made them
  PixelSize pixel_size;
  std::string solver = "band-limited integral";
  PreparationOptions preparation;
  std::vector<double> noise_frequency;  ///< lambda of the noise spectrum's nodes; empty when no spectrum is stored
  Provenance provenance;
};

/// What holds for one image.
struct CoefficientRecord {
  Centre centre;
  std::string source;
  ImageStatus status;
  double noise_sd = 0;                 ///< 0 = not estimated
  std::vector<double> noise_spectrum;  ///< variance per real degree of freedom at noise_frequency
  double background[6] = {};           ///< as in PreparedImage
};

/// Writes a coefficient file beside its place and renames it when finish() is called; without that nothing is left.
/// Throws Error(cannot_write). Not thread-safe; several writers may work at once.
class CoefficientWriter {
 public:
  /// `overwrite`: else an existing file is an error, before anything is computed.
  CoefficientWriter(const std::string& path, const DiskBasis& basis, const CoefficientHeader& header, bool overwrite);
  ~CoefficientWriter();
  CoefficientWriter(const CoefficientWriter&) = delete;
  CoefficientWriter& operator=(const CoefficientWriter&) = delete;

  /// Appends images: coefficients (images x terms), one record per image.
  void append(MatrixView<const std::complex<double>> coefficients, const std::vector<CoefficientRecord>& records);
  void append(MatrixView<const std::complex<float>> coefficients, const std::vector<CoefficientRecord>& records);
  /// `provenance`: the final one, with the hashes of the inputs.
  void finish(const Provenance& provenance);

 private:
  struct State;
  std::unique_ptr<State> state_;
};

/// Reads a coefficient file. Throws Error(bad_input) naming the file and what is wrong with it: missing, not HDF5, a
/// missing dataset, shapes that disagree, terms that are not those of its geometry, a newer schema. Thread-safe.
class CoefficientReader {
 public:
  explicit CoefficientReader(const std::string& path);
  ~CoefficientReader();

  const CoefficientHeader& header() const noexcept;
  const DiskBasis& basis() const noexcept;
  std::size_t images() const noexcept;

  /// Reads images first .. first + out.rows - 1 into out (images x terms); records may be null.
  void read(std::size_t first, MatrixView<std::complex<double>> out, std::vector<CoefficientRecord>* records) const;

 private:
  struct State;
  std::unique_ptr<State> state_;
};

}  // namespace tambour
