// Image stacks in files: reading, writing, and outputs that appear only when whole.
#pragma once

#include <cstddef>
#include <cstdint>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "tambour/image_source.hpp"
#include "tambour/views.hpp"

namespace tambour {

/// How images are read.
struct OpenOptions {
  /// Channel of colour images, from 0 (in the file's order, red first). Not set: luma 0.299 R + 0.587 G + 0.114 B
  /// (ITU-R BT.601).
  std::optional<int> channel;
  std::optional<PixelSize> pixel_size;  ///< instead of what the files tell
};

/// An ImageSource over files that also tells what a person should know.
class FileSource : public ImageSource {
 public:
  /// Distinct files that images are read from, in order, for hashing.
  virtual std::vector<std::string> files() const = 0;
  /// Sentences such as "photo.jpg: colour, read as luma" or "x.jpg: EXIF orientation is ignored"; empty when there is
  /// nothing to say.
  virtual std::vector<std::string> remarks() const = 0;
};

/// Opens one or more inputs as one stack: PNG, JPEG, TIFF (multi-page), MRC2014 (.mrc .mrcs .map), .npy, HDF5
/// (`file.h5::/path/to/dataset`; the dataset may be left out where only one can be images), or `@list.txt` with one
/// input a line (# comments; relative to the list's folder).
///
/// The stack's image size is that of its first image; others of another size are skipped when read. The kind is told
/// from the file's first bytes, not from its name. 2-D arrays are one image, 3-D ones (images, rows, columns). A file
/// that cannot be opened or has a lying header: Error(bad_input) when it is the only input; in a list or among several
/// inputs it stands as one image whose read() gives the reason. No allocation larger than the file's own length
/// justifies. Throws Error(bad_input) also when there is no image at all or no input can be read.
std::unique_ptr<FileSource> open_images(const std::vector<std::string>& inputs, const OpenOptions& options = {});

/// Type of the pixels in a written stack.
enum class PixelType { float32, float64 };

/// Writes a stack image by image: .mrc/.mrcs (mode 2, float32 only), .npy, .tif/.tiff, .h5/.hdf5 (dataset /images), by
/// extension. Made beside its place and renamed by finish(); without that nothing is left. Throws Error(cannot_write),
/// and Error(invalid_argument) for an unknown extension or a type that the format cannot hold. Not thread-safe.
class StackWriter {
 public:
  virtual ~StackWriter() = default;
  virtual void append(ImageView<const double> image) = 0;
  /// Renames the file into place. Exactly `images` (as announced) must have been appended.
  virtual void finish() = 0;
};

struct StackShape {
  std::size_t images = 0;
  std::ptrdiff_t rows = 0;
  std::ptrdiff_t columns = 0;
  PixelSize pixel_size;
  PixelType type = PixelType::float32;
};

std::unique_ptr<StackWriter> create_stack(const std::string& path, const StackShape& shape, bool overwrite);

/// A text file that appears under its name only when commit() is called; without that nothing is left.
/// Throws Error(cannot_write): no such folder, read-only, exists and not `overwrite`, full disk. Path "-" is not
/// special.
class OutputFile {
 public:
  OutputFile(const std::string& path, bool overwrite);
  ~OutputFile();
  OutputFile(const OutputFile&) = delete;
  OutputFile& operator=(const OutputFile&) = delete;

  void write(const std::string& text);
  void commit();
  /// Where the bytes are until commit(); for writers that open the file themselves.
  const std::string& temporary_path() const noexcept;

 private:
  struct State;
  std::unique_ptr<State> state_;
};

/// Throws Error(cannot_write) unless a file could be made at `path`: to be called before long work.
void check_writable(const std::string& path, bool overwrite);

/// A table with a header line: CSV, `#` comment lines skipped, cells trimmed.
struct Table {
  std::vector<std::string> columns;
  std::vector<std::vector<std::string>> rows;

  /// Index of a column. Throws Error(bad_input) naming the columns there are.
  std::size_t column(const std::string& name) const;
  /// A cell as a number. Throws Error(bad_input) with the table's path, line and text.
  double number(std::size_t row, std::size_t column) const;

  std::string path;
  std::vector<std::size_t> lines;  ///< line of each row in the file, from 1
};

/// Reads a CSV table. Throws Error(bad_input): missing file, no header, a row with another number of cells.
Table read_table(const std::string& path);

/// A grey or red-green-blue picture as PNG bytes: 8 bits a channel; channels = 1 or 3, columns = width * channels.
std::vector<std::uint8_t> encode_png(MatrixView<const std::uint8_t> pixels, int channels);

}  // namespace tambour
