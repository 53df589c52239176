// NumPy .npy arrays (images, rows, columns) in format version 1.0.
#include "files/npy_header.hpp"
#include "files/output_file.hpp"
#include "files/stack_writer.hpp"

namespace tambour {
namespace {

class NpyWriter final : public CheckedStackWriter {
 public:
  NpyWriter(const std::string& path, const StackShape& shape, bool overwrite)
      : CheckedStackWriter(path, shape), file_(path, overwrite) {
    const auto rows = static_cast<std::size_t>(shape.rows), columns = static_cast<std::size_t>(shape.columns);
    file_.append_text(npy_header(shape.type, {shape.images, rows, columns}));
  }

 private:
  void put(ImageView<const double> image) override {
    encode_pixels(image, shape().type, pixels_);
    file_.append(pixels_);
  }
  void complete() override { file_.commit(); }

  AtomicFile file_;
  std::vector<std::byte> pixels_;
};

}  // namespace

std::unique_ptr<StackWriter> create_npy(const std::string& path, const StackShape& shape, bool overwrite) {
  return std::make_unique<NpyWriter>(path, shape, overwrite);
}

}  // namespace tambour
