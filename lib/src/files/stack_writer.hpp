// What the writers of all formats share.
#pragma once

#include <cstddef>
#include <memory>
#include <string>
#include <vector>

#include "tambour/files.hpp"

namespace tambour {

/// Checks shapes and counts; a format implements put() and complete().
class CheckedStackWriter : public StackWriter {
 public:
  CheckedStackWriter(std::string path, const StackShape& shape);
  void append(ImageView<const double> image) final;
  void finish() final;

 protected:
  /// Writes the image number done().
  virtual void put(ImageView<const double> image) = 0;
  /// Writes what comes last and renames the file into its place.
  virtual void complete() = 0;

  const std::string& path() const noexcept { return path_; }
  const StackShape& shape() const noexcept { return shape_; }
  std::size_t done() const noexcept { return done_; }

 private:
  std::string path_;
  StackShape shape_;
  std::size_t done_ = 0;
};

/// The pixels as numbers of that type in the host's byte order, row after row.
void encode_pixels(ImageView<const double> image, PixelType type, std::vector<std::byte>& out);

std::unique_ptr<StackWriter> create_mrc(const std::string& path, const StackShape& shape, bool overwrite);
std::unique_ptr<StackWriter> create_npy(const std::string& path, const StackShape& shape, bool overwrite);
std::unique_ptr<StackWriter> create_tiff(const std::string& path, const StackShape& shape, bool overwrite);
std::unique_ptr<StackWriter> create_hdf5(const std::string& path, const StackShape& shape, bool overwrite);

}  // namespace tambour
