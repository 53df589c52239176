// Plain tables of numbers in files that other programs read as one array.
#pragma once

#include <cstddef>
#include <memory>
#include <string>

#include "tambour/views.hpp"

namespace tambour {

/// Writes a matrix of 64-bit floats some rows at a time: .npy, or .h5/.hdf5 (one dataset), by extension.
/// Made beside its place and renamed by finish(); without that nothing is left. Throws Error(cannot_write), and
/// Error(invalid_argument) for an unknown extension or another number of rows or columns than announced. Not
/// thread-safe.
class MatrixWriter {
 public:
  virtual ~MatrixWriter() = default;
  virtual void append(MatrixView<const double> rows) = 0;
  /// Renames the file into place. Exactly the announced rows must have been appended.
  virtual void finish() = 0;
};

struct MatrixShape {
  std::size_t rows = 0;
  std::size_t columns = 0;
  std::string dataset = "/matrix";  ///< its name in an HDF5 file
};

std::unique_ptr<MatrixWriter> create_matrix(const std::string& path, const MatrixShape& shape, bool overwrite);

}  // namespace tambour
