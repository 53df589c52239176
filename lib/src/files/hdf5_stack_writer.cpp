// HDF5 stacks: dataset /images (images, rows, columns) with the attributes pixel_size and unit.
#include "files/hdf5_output.hpp"
#include "files/stack_writer.hpp"

namespace tambour {
namespace {

class Hdf5StackWriter final : public CheckedStackWriter {
 public:
  Hdf5StackWriter(const std::string& path, const StackShape& shape, bool overwrite)
      : CheckedStackWriter(path, shape), output_(path, overwrite) {
    output_.run([&] {
      const bool single = shape.type == PixelType::float32;
      const auto space = simple_space({shape.images, rows(), columns()});
      const Hdf5Handle creation(H5Pcreate(H5P_DATASET_CREATE), H5Pclose, "set up a dataset");
      checked(H5Pset_obj_track_times(creation.get(), false), "set up a dataset");
      dataset_ = Hdf5Handle(H5Dcreate2(output_.file(), "/images", single ? H5T_IEEE_F32LE : H5T_IEEE_F64LE, space.get(),
                                       H5P_DEFAULT, creation.get(), H5P_DEFAULT),
                            H5Dclose, "make a dataset");
      if (!shape.pixel_size.known()) return;
      write_attribute(dataset_.get(), "pixel_size", shape.pixel_size.value);
      write_attribute(dataset_.get(), "unit", shape.pixel_size.unit);
    });
  }

 private:
  hsize_t rows() const { return static_cast<hsize_t>(shape().rows); }
  hsize_t columns() const { return static_cast<hsize_t>(shape().columns); }

  void put(ImageView<const double> image) override {
    const PixelType type = shape().type;
    encode_pixels(image, type, pixels_);
    output_.run([&] {
      const auto place = selected_space(dataset_.get(), {done(), 0, 0}, {1, rows(), columns()});
      const auto memory = simple_space({rows(), columns()});
      checked(H5Dwrite(dataset_.get(), type == PixelType::float32 ? H5T_NATIVE_FLOAT : H5T_NATIVE_DOUBLE, memory.get(),
                       place.get(), H5P_DEFAULT, pixels_.data()),
              "write an image");
    });
  }

  void complete() override {
    dataset_.reset();
    output_.finish();
  }

  Hdf5Output output_;
  Hdf5Handle dataset_;
  std::vector<std::byte> pixels_;
};

}  // namespace

std::unique_ptr<StackWriter> create_hdf5(const std::string& path, const StackShape& shape, bool overwrite) {
  return std::make_unique<Hdf5StackWriter>(path, shape, overwrite);
}

}  // namespace tambour
