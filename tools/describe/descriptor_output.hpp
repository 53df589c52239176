// Where descriptors go: a table for people, or an array for programs.
#pragma once

#include <memory>
#include <string>
#include <vector>

#include "common/session.hpp"
#include "tambour/views.hpp"

namespace tambour::tools::describe {

/// One row an image, one column a number. Rows of skipped images hold NaN (empty cells in CSV).
class DescriptorOutput {
 public:
  virtual ~DescriptorOutput() = default;
  virtual void append(MatrixView<const double> rows) = 0;
  virtual void finish() = 0;
};

/// By extension: .csv, .npy, .h5, .hdf5. Throws Error(invalid_argument) for any other.
std::unique_ptr<DescriptorOutput> create_output(const std::string& path, std::size_t images,
                                                const std::vector<std::string>& names, const Session& session,
                                                bool overwrite);

}  // namespace tambour::tools::describe
