// Matrices as .npy arrays and HDF5 datasets.
#include "tambour/matrix_file.hpp"

#include <cctype>
#include <filesystem>
#include <utility>
#include <vector>

#include "base/check.hpp"
#include "files/byte_order.hpp"
#include "files/hdf5_output.hpp"
#include "files/npy_header.hpp"
#include "files/output_file.hpp"
#include "files/stack_writer.hpp"

namespace tambour {
namespace {

/// Checks shapes and counts; a format implements put() and complete().
class CheckedMatrixWriter : public MatrixWriter {
 public:
  CheckedMatrixWriter(std::string path, MatrixShape shape) : path_(std::move(path)), shape_(std::move(shape)) {}

  void append(MatrixView<const double> rows) final {
    const auto count = static_cast<std::size_t>(rows.rows);
    require(static_cast<std::size_t>(rows.columns) == shape_.columns, "the number of columns", rows.columns,
            fmt::format("{}, as announced for {}", shape_.columns, path_));
    require(done_ + count <= shape_.rows, "the number of rows", done_ + count,
            fmt::format("{}, as announced for {}", shape_.rows, path_));
    if (count > 0) put(rows);
    done_ += count;
  }

  void finish() final {
    require(done_ == shape_.rows, "the number of rows", done_,
            fmt::format("{}, as announced for {}", shape_.rows, path_));
    complete();
  }

 protected:
  virtual void put(MatrixView<const double> rows) = 0;
  virtual void complete() = 0;

  const MatrixShape& shape() const noexcept { return shape_; }
  std::size_t done() const noexcept { return done_; }

 private:
  std::string path_;
  MatrixShape shape_;
  std::size_t done_ = 0;
};

class NpyMatrixWriter final : public CheckedMatrixWriter {
 public:
  NpyMatrixWriter(const std::string& path, const MatrixShape& shape, bool overwrite)
      : CheckedMatrixWriter(path, shape), file_(path, overwrite) {
    file_.append_text(npy_header(PixelType::float64, {shape.rows, shape.columns}));
  }

 private:
  void put(MatrixView<const double> rows) override {
    encode_pixels(rows, PixelType::float64, bytes_);
    file_.append(bytes_);
  }
  void complete() override { file_.commit(); }

  AtomicFile file_;
  std::vector<std::byte> bytes_;
};

class Hdf5MatrixWriter final : public CheckedMatrixWriter {
 public:
  Hdf5MatrixWriter(const std::string& path, const MatrixShape& shape, bool overwrite)
      : CheckedMatrixWriter(path, shape), output_(path, overwrite) {
    output_.run([&] {
      const auto space = simple_space({shape.rows, shape.columns});
      const Hdf5Handle creation(H5Pcreate(H5P_DATASET_CREATE), H5Pclose, "set up a dataset");
      checked(H5Pset_obj_track_times(creation.get(), false), "set up a dataset");
      dataset_ = Hdf5Handle(H5Dcreate2(output_.file(), shape.dataset.c_str(), H5T_IEEE_F64LE, space.get(), H5P_DEFAULT,
                                       creation.get(), H5P_DEFAULT),
                            H5Dclose, "make a dataset");
    });
  }

 private:
  void put(MatrixView<const double> rows) override {
    encode_pixels(rows, PixelType::float64, bytes_);
    output_.run([&] {
      const auto count = static_cast<hsize_t>(rows.rows);
      const auto place = selected_space(dataset_.get(), {done(), 0}, {count, shape().columns});
      const auto memory = simple_space({count, shape().columns});
      checked(H5Dwrite(dataset_.get(), H5T_NATIVE_DOUBLE, memory.get(), place.get(), H5P_DEFAULT, bytes_.data()),
              "write rows");
    });
  }

  void complete() override {
    dataset_.reset();
    output_.finish();
  }

  Hdf5Output output_;
  Hdf5Handle dataset_;
  std::vector<std::byte> bytes_;
};

}  // namespace

std::unique_ptr<MatrixWriter> create_matrix(const std::string& path, const MatrixShape& shape, bool overwrite) {
  require(shape.rows > 0, "the number of rows", shape.rows, "1 or more");
  require(shape.columns > 0, "the number of columns", shape.columns, "1 or more");
  std::string extension = std::filesystem::path(path).extension().string();
  for (char& letter : extension) letter = static_cast<char>(std::tolower(static_cast<unsigned char>(letter)));
  if (extension == ".npy") return std::make_unique<NpyMatrixWriter>(path, shape, overwrite);
  if (extension == ".h5" || extension == ".hdf5") return std::make_unique<Hdf5MatrixWriter>(path, shape, overwrite);
  throw Error(ErrorCode::invalid_argument,
              fmt::format("{}: the extension tells the format; allowed are .npy .h5 .hdf5", path), extension,
              ".npy .h5 .hdf5");
}

}  // namespace tambour
