// One input file of images, whatever its format.
#pragma once

#include <cstddef>
#include <memory>
#include <string>
#include <vector>

#include "files/read_file.hpp"
#include "tambour/files.hpp"

namespace tambour {

/// Rows and columns of an image.
struct FrameShape {
  std::ptrdiff_t rows = 0;
  std::ptrdiff_t columns = 0;
  bool operator==(const FrameShape&) const = default;
};

inline FrameShape shape_of(ImageView<double> view) { return {view.rows, view.columns}; }

/// What each format implements. Const functions may run in many threads at once. Trouble with one page is thrown as
/// Error(bad_input) whose sentence becomes the reason why the image is skipped.
class ImageFile {
 public:
  virtual ~ImageFile() = default;

  virtual std::size_t pages() const noexcept = 0;
  virtual FrameShape shape(std::size_t page) const = 0;
  virtual PixelSize pixel_size() const = 0;
  /// What a person should know, without the file's name.
  virtual std::vector<std::string> remarks() const = 0;
  /// Reads the page if it has the shape of `out`, and else leaves `out` alone. Returns the page's shape.
  virtual FrameShape read(std::size_t page, ImageView<double> out) const = 0;
};

using SharedReadFile = std::shared_ptr<const ReadFile>;

// One function a format; each throws Error(bad_input) when the file as a whole cannot be used.
std::unique_ptr<ImageFile> open_png(SharedReadFile file, const OpenOptions& options);
std::unique_ptr<ImageFile> open_jpeg(SharedReadFile file, const OpenOptions& options);
std::unique_ptr<ImageFile> open_tiff(SharedReadFile file, const OpenOptions& options);
std::unique_ptr<ImageFile> open_mrc(SharedReadFile file, const OpenOptions& options);
std::unique_ptr<ImageFile> open_npy(SharedReadFile file, const OpenOptions& options);
/// `dataset`: its path in the file, or empty where the file has only one dataset that can be images.
std::unique_ptr<ImageFile> open_hdf5(SharedReadFile file, const std::string& dataset, const OpenOptions& options);

/// Opens one input: tells the format from the first bytes. `input` may end in `::/dataset`.
std::unique_ptr<ImageFile> open_image_file(const std::string& input, const OpenOptions& options);

/// The file of an input without `::/dataset`, and that dataset.
struct InputPath {
  std::string file;
  std::string dataset;
};
InputPath split_input(const std::string& input);

/// Replaces every `@list.txt` by the inputs it names. Throws Error(bad_input).
std::vector<std::string> expand_lists(const std::vector<std::string>& inputs);

}  // namespace tambour
