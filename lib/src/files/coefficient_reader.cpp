#include <algorithm>
#include <cmath>

#include "base/check.hpp"
#include "files/coefficient_layout.hpp"
#include "files/frame_checks.hpp"
#include "files/read_file.hpp"
#include "files/refuse.hpp"

namespace tambour {
namespace {

std::string shape_text(const std::vector<hsize_t>& shape) { return fmt::format("{}", fmt::join(shape, " x ")); }

// A whole one-dimensional dataset of numbers, which must have `count` of them.
template <class T>
std::vector<T> read_all(hid_t file, const char* name, hid_t memory_type, std::size_t count) {
  const auto dataset = open_dataset(file, name);
  const auto shape = dimensions_of(dataset.get());
  if (shape != std::vector<hsize_t>{count})
    throw Hdf5Failure(fmt::format("{} has the shape {}; allowed is {}", name, shape_text(shape), count));
  std::vector<T> values(count);
  checked(H5Dread(dataset.get(), memory_type, H5S_ALL, H5S_ALL, H5P_DEFAULT, values.data()), "read a dataset");
  return values;
}

// The terms follow from the geometry; a file whose terms differ was made by other rules or was damaged.
void check_terms(hid_t file, const DiskBasis& basis) {
  constexpr double tolerance = 1e-12;
  const auto terms = basis.terms();
  const auto orders = read_all<int>(file, layout::angular_order, H5T_NATIVE_INT, terms.size());
  const auto indices = read_all<int>(file, layout::radial_index, H5T_NATIVE_INT, terms.size());
  const auto roots = read_all<double>(file, layout::root, H5T_NATIVE_DOUBLE, terms.size());
  read_all<double>(file, layout::white_noise_gain, H5T_NATIVE_DOUBLE, terms.size());
  for (std::size_t i = 0; i < terms.size(); ++i)
    if (orders[i] != terms[i].angular_order || indices[i] != terms[i].radial_index ||
        !(std::abs(roots[i] - terms[i].root) <= tolerance * std::max(1.0, terms[i].root)))
      throw Hdf5Failure(
          fmt::format("term {} is order {}, index {}, root {:.15g}, but its geometry gives {}, {}, {:.15g}", i,
                      orders[i], indices[i], roots[i], terms[i].angular_order, terms[i].radial_index, terms[i].root));
}

/// Nothing of an analysed image may be other than a number.
void check_image(std::size_t image, const CoefficientRecord& record, const std::complex<double>* coefficients,
                 std::ptrdiff_t terms) {
  if (!record.status.ok()) return;
  if (!std::isfinite(record.centre.x) || !std::isfinite(record.centre.y))
    throw Hdf5Failure(fmt::format("the centre of image {} is not finite", image));
  for (std::ptrdiff_t i = 0; i < terms; ++i)
    if (!std::isfinite(coefficients[i].real()) || !std::isfinite(coefficients[i].imag()))
      throw Hdf5Failure(fmt::format("image {}: coefficient {} is not finite", image, i));
}

}  // namespace

struct CoefficientReader::State {
  explicit State(const std::string& path) : name(path) {
    const std::uint64_t length = ReadFile(path).size();
    const Hdf5Lock lock;
    try {
      if (H5Fis_hdf5(path.c_str()) <= 0) throw Hdf5Failure("not an HDF5 file");
      file = open_hdf5_file(path);
      header = layout::read_header(file.get());
      if (const auto problems = header.geometry.problems(); !problems.empty()) throw Hdf5Failure(problems[0]);
      if (static_cast<double>(std::min(header.rows, header.columns)) < 2 * header.geometry.radius)
        throw Hdf5Failure(fmt::format("a frame of {} x {} px (columns x rows) holds no disk of radius {} px",
                                      header.columns, header.rows, header.geometry.radius));
      basis.emplace(header.geometry);
      check_terms(file.get(), *basis);
      open_columns(length);
      header.provenance = layout::read_provenance(file.get());
    } catch (const Hdf5Failure& failure) {
      refuse_input("{}: {}", path, failure.what());
    } catch (const Error& error) {
      refuse_input("{}: {}", path, error.what());
    }
  }

  void open_columns(std::uint64_t length) {
    coefficients = open_dataset(file.get(), layout::coefficients);
    const auto shape = dimensions_of(coefficients.get());
    if (shape.size() != 2 || shape[1] != basis->size())
      throw Hdf5Failure(fmt::format("{} has the shape {}; allowed is images x {}", layout::coefficients,
                                    shape_text(shape), basis->size()));
    images = static_cast<std::size_t>(shape[0]);
    const std::uint64_t stored = H5Dget_storage_size(coefficients.get());
    if (stored > length)
      throw Hdf5Failure(fmt::format("{} tells {} bytes, the file has {}", layout::coefficients, stored, length));
    check_expansion(name, product({shape[0], shape[1], header.double_precision ? 16U : 8U}), stored, any_expansion);

    centre = open_column(layout::centre, {images, 2});
    source = open_column(layout::source, {images});
    status = open_column(layout::status, {images});
    noise_sd = open_column(layout::noise_sd, {images});
    background = open_column(layout::background, {images, 6});
    if (checked(H5Lexists(file.get(), layout::noise_spectrum, H5P_DEFAULT), "look for the noise spectrum") == 0) return;
    const auto nodes = dimensions_of(open_dataset(file.get(), layout::noise_frequency).get());
    if (nodes.size() != 1)
      throw Hdf5Failure(
          fmt::format("{} has the shape {}; allowed is one dimension", layout::noise_frequency, shape_text(nodes)));
    noise_spectrum = open_column(layout::noise_spectrum, {images, nodes[0]});
    header.noise_frequency =
        read_all<double>(file.get(), layout::noise_frequency, H5T_NATIVE_DOUBLE, static_cast<std::size_t>(nodes[0]));
  }

  Hdf5Handle open_column(const char* dataset_name, const std::vector<hsize_t>& expected) const {
    Hdf5Handle dataset = open_dataset(file.get(), dataset_name);
    if (const auto shape = dimensions_of(dataset.get()); shape != expected)
      throw Hdf5Failure(
          fmt::format("{} has the shape {}; allowed is {}", dataset_name, shape_text(shape), shape_text(expected)));
    return dataset;
  }

  // Rows first .. first + count - 1 of a dataset with `width` numbers an image; width 0: one number, no second
  // dimension.
  static std::vector<double> numbers(hid_t dataset, std::size_t first, std::size_t count, std::size_t width) {
    std::vector<double> values(count * std::max<std::size_t>(width, 1));
    const auto place =
        width == 0 ? selected_space(dataset, {first}, {count}) : selected_space(dataset, {first, 0}, {count, width});
    const auto memory = simple_space({values.size()});
    checked(H5Dread(dataset, H5T_NATIVE_DOUBLE, memory.get(), place.get(), H5P_DEFAULT, values.data()), "read values");
    return values;
  }

  static std::vector<std::string> texts(hid_t dataset, std::size_t first, std::size_t count) {
    const auto place = selected_space(dataset, {first}, {count});
    const auto memory = simple_space({count});
    return read_strings(dataset, memory.get(), place.get(), count);
  }

  void read_coefficients(std::size_t first, MatrixView<std::complex<double>> out) const {
    const auto count = static_cast<hsize_t>(out.rows), width = static_cast<hsize_t>(out.columns);
    const auto stride = static_cast<hsize_t>(out.row_stride);
    const auto place = selected_space(coefficients.get(), {first, 0}, {count, width});
    const auto memory = simple_space({count, stride});
    const hsize_t start[] = {0, 0}, size[] = {count, width};
    checked(H5Sselect_hyperslab(memory.get(), H5S_SELECT_SET, start, nullptr, size, nullptr), "select coefficients");
    const auto type = layout::complex_type(H5T_NATIVE_DOUBLE);
    checked(H5Dread(coefficients.get(), type.get(), memory.get(), place.get(), H5P_DEFAULT, out.data),
            "read coefficients");
  }

  void read_records(std::size_t first, std::size_t count, std::vector<CoefficientRecord>& records) const {
    const std::size_t nodes = header.noise_frequency.size();
    const auto centres = numbers(centre.get(), first, count, 2);
    const auto sources = texts(source.get(), first, count), statuses = texts(status.get(), first, count);
    const auto noise = numbers(noise_sd.get(), first, count, 0);
    const auto backgrounds = numbers(background.get(), first, count, 6);
    const auto spectra = nodes > 0 ? numbers(noise_spectrum.get(), first, count, nodes) : std::vector<double>{};
    records.assign(count, {});
    for (std::size_t i = 0; i < count; ++i) {
      CoefficientRecord& record = records[i];
      record.centre = {centres[2 * i], centres[2 * i + 1]};
      record.source = sources[i];
      record.status.reason = statuses[i] == "ok" ? "" : statuses[i];
      record.noise_sd = noise[i];
      std::copy_n(&backgrounds[6 * i], 6, record.background);
      record.noise_spectrum.assign(spectra.begin() + static_cast<std::ptrdiff_t>(i * nodes),
                                   spectra.begin() + static_cast<std::ptrdiff_t>((i + 1) * nodes));
    }
  }

  std::string name;
  Hdf5Handle file;
  CoefficientHeader header;
  std::optional<DiskBasis> basis;
  std::size_t images = 0;
  Hdf5Handle coefficients, centre, source, status, noise_sd, background, noise_spectrum;
};

CoefficientReader::CoefficientReader(const std::string& path) : state_(std::make_unique<State>(path)) {}

CoefficientReader::~CoefficientReader() = default;

const CoefficientHeader& CoefficientReader::header() const noexcept { return state_->header; }

const DiskBasis& CoefficientReader::basis() const noexcept { return *state_->basis; }

std::size_t CoefficientReader::images() const noexcept { return state_->images; }

void CoefficientReader::read(std::size_t first, MatrixView<std::complex<double>> out,
                             std::vector<CoefficientRecord>* records) const {
  require(out.columns == static_cast<std::ptrdiff_t>(state_->basis->size()), "the number of coefficients an image",
          out.columns, fmt::format("{}", state_->basis->size()));
  require(out.rows >= 0 && out.row_stride >= out.columns, "the stride of the coefficients", out.row_stride,
          fmt::format("{} or more", out.columns));
  const auto count = static_cast<std::size_t>(out.rows);
  require(first <= state_->images && count <= state_->images - first, "the last image asked for", first + count,
          fmt::format("at most {}", state_->images));
  if (records != nullptr) records->clear();
  if (count == 0) return;
  const Hdf5Lock lock;
  try {
    state_->read_coefficients(first, out);
    std::vector<CoefficientRecord> checked;
    state_->read_records(first, count, checked);
    for (std::size_t i = 0; i < count; ++i)
      check_image(first + i, checked[i], out.row(static_cast<std::ptrdiff_t>(i)), out.columns);
    if (records != nullptr) *records = std::move(checked);
  } catch (const Hdf5Failure& failure) {
    refuse_input("{}: images {} to {}: {}", state_->name, first, first + count - 1, failure.what());
  }
}

}  // namespace tambour
