// Writes one file of each output format for readers by others: write_samples FOLDER (see
// tests/tools/readers_by_others_test.py, which knows the values).
#include <cstdio>
#include <exception>
#include <string>
#include <vector>

#include "tambour/coefficient_file.hpp"
#include "tambour/files.hpp"
#include "tambour/version.hpp"

namespace {

using namespace tambour;

constexpr std::ptrdiff_t images = 3, rows = 24, columns = 20;

void write_stack(const std::string& path, const PixelSize& pixel_size, PixelType type) {
  StackShape shape;
  shape.images = images;
  shape.rows = rows;
  shape.columns = columns;
  shape.pixel_size = pixel_size;
  shape.type = type;
  const auto writer = create_stack(path, shape, true);
  std::vector<double> pixels(rows * columns);
  for (std::ptrdiff_t i = 0; i < images; ++i) {
    for (std::ptrdiff_t y = 0; y < rows; ++y)
      for (std::ptrdiff_t x = 0; x < columns; ++x)
        pixels[static_cast<std::size_t>(y * columns + x)] = static_cast<double>(7 * i + 3 * y + x) * 0.375 - 11.5;
    writer->append({pixels.data(), rows, columns});
  }
  writer->finish();
}

template <class T>
void write_coefficients(const std::string& path) {
  CoefficientHeader header;
  header.geometry = {12, Edge::dirichlet, 0.8};
  header.rows = rows;
  header.columns = columns;
  header.double_precision = sizeof(T) == 8;
  header.tolerance = 1e-6;
  header.pixel_size = {1.35, "angstrom"};
  header.noise_frequency = {1, 10, 30};
  const DiskBasis basis(header.geometry);
  CoefficientWriter writer(path, basis, header, true);
  for (int image = 0; image < images; ++image) {
    std::vector<std::complex<T>> values;
    for (std::size_t term = 0; term < basis.size(); ++term)
      values.emplace_back(static_cast<T>(image + 1), static_cast<T>(term) / 4);
    CoefficientRecord record;
    record.centre = {9.5 + image, 11.5};
    record.source = "stack.mrc#" + std::to_string(image);
    if (image == 2) record.status.reason = "constant image";
    record.noise_sd = 0.5 * image;
    record.noise_spectrum = {1, 2, 3};
    record.background[3] = image;
    writer.append(MatrixView<const std::complex<T>>(values.data(), 1, static_cast<std::ptrdiff_t>(values.size())),
                  {record});
  }
  writer.finish({"tambour-analyse stack.mrc -o c.h5",
                 version(),
                 {{"HDF5", "x.y"}},
                 {{"radius", "12"}},
                 {{"stack.mrc", std::string(64, 'a')}}});
}

}  // namespace

int main(int count, char** arguments) {
  if (count != 2) {
    std::fputs("usage: write_samples FOLDER\n", stderr);
    return 2;
  }
  try {
    const std::string folder = std::string(arguments[1]) + "/";
    const PixelSize pixel{1.35, "angstrom"};
    write_stack(folder + "stack.mrcs", pixel, PixelType::float32);
    write_stack(folder + "unsized.mrc", {}, PixelType::float32);
    for (const auto& [name, type] : {std::pair("32", PixelType::float32), std::pair("64", PixelType::float64)}) {
      write_stack(folder + "stack" + name + ".npy", pixel, type);
      write_stack(folder + "stack" + name + ".tif", pixel, type);
      write_stack(folder + "stack" + name + ".h5", pixel, type);
    }
    write_coefficients<float>(folder + "single.h5");
    write_coefficients<double>(folder + "double.h5");
    return 0;
  } catch (const std::exception& error) {
    std::fprintf(stderr, "write_samples: %s\n", error.what());
    return 1;
  }
}
