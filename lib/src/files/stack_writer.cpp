#include "files/stack_writer.hpp"

#include <cctype>
#include <filesystem>
#include <utility>

#include "base/check.hpp"
#include "files/byte_order.hpp"
#include "files/refuse.hpp"

namespace tambour {

CheckedStackWriter::CheckedStackWriter(std::string path, const StackShape& shape)
    : path_(std::move(path)), shape_(shape) {}

void CheckedStackWriter::append(ImageView<const double> image) {
  if (image.rows != shape_.rows || image.columns != shape_.columns)
    throw Error(ErrorCode::invalid_argument,
                fmt::format("{}: an image of {} x {} pixels (rows x columns) was given for a stack of {} x {}", path_,
                            image.rows, image.columns, shape_.rows, shape_.columns));
  if (done_ == shape_.images)
    throw Error(ErrorCode::invalid_argument,
                fmt::format("{}: more images than the {} announced were given", path_, shape_.images));
  put(image);
  ++done_;
}

void CheckedStackWriter::finish() {
  if (done_ != shape_.images)
    throw Error(ErrorCode::invalid_argument,
                fmt::format("{}: {} images were given, {} were announced", path_, done_, shape_.images));
  complete();
}

void encode_pixels(ImageView<const double> image, PixelType type, std::vector<std::byte>& out) {
  const std::size_t bytes = type == PixelType::float32 ? 4 : 8;
  out.resize(static_cast<std::size_t>(image.rows * image.columns) * bytes);
  std::byte* to = out.data();
  for (std::ptrdiff_t y = 0; y < image.rows; ++y)
    for (std::ptrdiff_t x = 0; x < image.columns; ++x, to += bytes)
      if (type == PixelType::float32)
        store(to, static_cast<float>(image(y, x)), host_is_big_endian);
      else
        store(to, image(y, x), host_is_big_endian);
}

std::unique_ptr<StackWriter> create_stack(const std::string& path, const StackShape& shape, bool overwrite) {
  require(shape.images > 0, "the number of images", shape.images, "1 or more");
  require(shape.rows > 0, "the number of rows", shape.rows, "1 or more");
  require(shape.columns > 0, "the number of columns", shape.columns, "1 or more");
  std::string extension = std::filesystem::path(path).extension().string();
  for (char& letter : extension) letter = static_cast<char>(std::tolower(static_cast<unsigned char>(letter)));
  if (extension == ".mrc" || extension == ".mrcs") return create_mrc(path, shape, overwrite);
  if (extension == ".npy") return create_npy(path, shape, overwrite);
  if (extension == ".tif" || extension == ".tiff") return create_tiff(path, shape, overwrite);
  if (extension == ".h5" || extension == ".hdf5") return create_hdf5(path, shape, overwrite);
  throw Error(ErrorCode::invalid_argument,
              fmt::format("{}: the extension tells the format; allowed are .mrc .mrcs .npy .tif .tiff .h5 .hdf5", path),
              extension, ".mrc .mrcs .npy .tif .tiff .h5 .hdf5");
}

}  // namespace tambour
