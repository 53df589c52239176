#include <fmt/format.h>

#include <algorithm>
#include <optional>

#include "files/coefficient_layout.hpp"
#include "files/hdf5_output.hpp"
#include "tambour/error.hpp"

namespace tambour {
namespace {

// One dataset that grows with the images; `width` values for each.
class Column {
 public:
  Column(hid_t file, const char* name, hid_t type, std::size_t width, bool scalar) : width_(width), scalar_(scalar) {
    // About a megabyte a chunk: large enough to stream, small enough to read one image of a large file.
    constexpr hsize_t chunk_bytes = 1 << 20, most_rows = 1024;
    const hsize_t row_bytes = std::max<hsize_t>(1, H5Tget_size(type) * width);
    const hsize_t rows = std::clamp<hsize_t>(chunk_bytes / row_bytes, 1, most_rows);
    std::vector<hsize_t> now = {0, width}, most = {H5S_UNLIMITED, width}, chunk = {rows, width};
    for (auto* sizes : {&now, &most, &chunk})
      if (scalar) sizes->pop_back();
    const Hdf5Handle space(H5Screate_simple(static_cast<int>(now.size()), now.data(), most.data()), H5Sclose,
                           "describe an array");
    const Hdf5Handle creation(H5Pcreate(H5P_DATASET_CREATE), H5Pclose, "set up a dataset");
    checked(H5Pset_obj_track_times(creation.get(), false), "set up a dataset");
    checked(H5Pset_chunk(creation.get(), static_cast<int>(chunk.size()), chunk.data()), "set up a dataset");
    // Room for two chunks, so that batches that end within one do not read it back.
    const Hdf5Handle access(H5Pcreate(H5P_DATASET_ACCESS), H5Pclose, "set up access");
    checked(H5Pset_chunk_cache(access.get(), H5D_CHUNK_CACHE_NSLOTS_DEFAULT, 2 * rows * row_bytes, 1.0),
            "set up access");
    dataset_ = Hdf5Handle(H5Dcreate2(file, name, type, space.get(), H5P_DEFAULT, creation.get(), access.get()),
                          H5Dclose, "make a dataset");
  }

  // Makes room for `count` images behind the first `before` and selects it, for `write` to fill.
  template <class Write>
  void append(std::size_t before, std::size_t count, const Write& write) {
    std::vector<hsize_t> whole = {before + count, width_}, start = {before, 0}, added = {count, width_};
    for (auto* sizes : {&whole, &start, &added})
      if (scalar_) sizes->pop_back();
    checked(H5Dset_extent(dataset_.get(), whole.data()), "extend a dataset");
    const auto place = selected_space(dataset_.get(), start, added);
    const auto memory = simple_space(added);
    write(dataset_.get(), memory.get(), place.get());
  }

  void append_numbers(std::size_t before, std::size_t count, hid_t memory_type, const void* values) {
    append(before, count, [&](hid_t dataset, hid_t memory, hid_t place) {
      checked(H5Dwrite(dataset, memory_type, memory, place, H5P_DEFAULT, values), "write values");
    });
  }

  void append_texts(std::size_t before, const std::vector<std::string>& values) {
    append(before, values.size(),
           [&](hid_t dataset, hid_t memory, hid_t place) { write_strings(dataset, memory, place, values); });
  }

 private:
  hsize_t width_;
  bool scalar_;
  Hdf5Handle dataset_;
};

// A dataset that is known from the beginning.
void write_fixed(hid_t file, const char* name, hid_t stored_type, hid_t memory_type, std::size_t count,
                 const void* values) {
  const auto space = simple_space({count});
  const Hdf5Handle creation(H5Pcreate(H5P_DATASET_CREATE), H5Pclose, "set up a dataset");
  checked(H5Pset_obj_track_times(creation.get(), false), "set up a dataset");
  const Hdf5Handle dataset(H5Dcreate2(file, name, stored_type, space.get(), H5P_DEFAULT, creation.get(), H5P_DEFAULT),
                           H5Dclose, "make a dataset");
  checked(H5Dwrite(dataset.get(), memory_type, H5S_ALL, H5S_ALL, H5P_DEFAULT, values), "write values");
}

void write_terms(hid_t file, const DiskBasis& basis) {
  std::vector<int> orders, indices;
  std::vector<double> roots, gains;
  for (const Term& term : basis.terms()) {
    orders.push_back(term.angular_order);
    indices.push_back(term.radial_index);
    roots.push_back(term.root);
    gains.push_back(term.white_noise_gain);
  }
  write_fixed(file, layout::angular_order, H5T_STD_I32LE, H5T_NATIVE_INT, orders.size(), orders.data());
  write_fixed(file, layout::radial_index, H5T_STD_I32LE, H5T_NATIVE_INT, indices.size(), indices.data());
  write_fixed(file, layout::root, H5T_IEEE_F64LE, H5T_NATIVE_DOUBLE, roots.size(), roots.data());
  write_fixed(file, layout::white_noise_gain, H5T_IEEE_F64LE, H5T_NATIVE_DOUBLE, gains.size(), gains.data());
}

Hdf5Handle make_group(hid_t file, const char* name) {
  return {H5Gcreate2(file, name, H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT), H5Gclose, "make a group"};
}

}  // namespace

struct CoefficientWriter::State {
  struct Columns {
    Columns(hid_t file, std::size_t terms, bool double_precision)
        : coefficients(file, layout::coefficients,
                       layout::complex_type(double_precision ? H5T_IEEE_F64LE : H5T_IEEE_F32LE).get(), terms, false),
          centre(file, layout::centre, H5T_IEEE_F64LE, 2, false),
          source(file, layout::source, string_type().get(), 1, true),
          status(file, layout::status, string_type().get(), 1, true),
          noise_sd(file, layout::noise_sd, H5T_IEEE_F64LE, 1, true),
          background(file, layout::background, H5T_IEEE_F64LE, 6, false) {}
    Column coefficients, centre, source, status, noise_sd, background;
    std::optional<Column> noise_spectrum;
  };

  State(const std::string& path, const DiskBasis& basis, const CoefficientHeader& header, bool overwrite)
      : terms(basis.size()), nodes(header.noise_frequency.size()), output(path, overwrite), name(path) {
    output.run([&] {
      const hid_t file = output.file();
      layout::write_header(file, header);
      make_group(file, "/terms");
      make_group(file, "/images");
      write_terms(file, basis);
      columns.emplace(file, terms, header.double_precision);
      if (nodes == 0) return;
      write_fixed(file, layout::noise_frequency, H5T_IEEE_F64LE, H5T_NATIVE_DOUBLE, nodes,
                  header.noise_frequency.data());
      columns->noise_spectrum.emplace(file, layout::noise_spectrum, H5T_IEEE_F64LE, nodes, false);
    });
  }

  // `values`: contiguous rows of complex numbers made of `part`.
  void append(const void* values, hid_t part, std::size_t count, const std::vector<CoefficientRecord>& records) {
    std::vector<double> centres, noise, spectra, backgrounds;
    std::vector<std::string> sources, statuses;
    for (const auto& record : records) {
      centres.insert(centres.end(), {record.centre.x, record.centre.y});
      sources.push_back(record.source);
      statuses.push_back(record.status.text());
      noise.push_back(record.noise_sd);
      backgrounds.insert(backgrounds.end(), std::begin(record.background), std::end(record.background));
      // An image without a spectrum (a skipped one) gets a row of zeros.
      spectra.insert(spectra.end(), record.noise_spectrum.begin(), record.noise_spectrum.end());
      spectra.resize(sources.size() * nodes);
    }
    output.run([&] {
      columns->coefficients.append_numbers(images, count, layout::complex_type(part).get(), values);
      columns->centre.append_numbers(images, count, H5T_NATIVE_DOUBLE, centres.data());
      columns->source.append_texts(images, sources);
      columns->status.append_texts(images, statuses);
      columns->noise_sd.append_numbers(images, count, H5T_NATIVE_DOUBLE, noise.data());
      columns->background.append_numbers(images, count, H5T_NATIVE_DOUBLE, backgrounds.data());
      if (nodes > 0) columns->noise_spectrum->append_numbers(images, count, H5T_NATIVE_DOUBLE, spectra.data());
    });
    images += count;
  }

  template <class T>
  void append(MatrixView<const std::complex<T>> coefficients, const std::vector<CoefficientRecord>& records) {
    check(coefficients.rows, coefficients.columns, records);
    if (coefficients.rows == 0) return;
    std::vector<std::complex<T>> rows;
    const std::complex<T>* values = coefficients.data;
    if (coefficients.row_stride != coefficients.columns) {
      for (std::ptrdiff_t i = 0; i < coefficients.rows; ++i)
        rows.insert(rows.end(), coefficients.row(i), coefficients.row(i) + coefficients.columns);
      values = rows.data();
    }
    const Hdf5Lock lock;  // the native types are calls of HDF5, too
    append(values, std::is_same_v<T, float> ? H5T_NATIVE_FLOAT : H5T_NATIVE_DOUBLE,
           static_cast<std::size_t>(coefficients.rows), records);
  }

  void check(std::ptrdiff_t rows, std::ptrdiff_t width, const std::vector<CoefficientRecord>& records) const {
    if (!columns)
      throw Error(ErrorCode::invalid_argument, name + ": coefficients were given after the file was finished");
    if (width != static_cast<std::ptrdiff_t>(terms) || rows != static_cast<std::ptrdiff_t>(records.size()))
      throw Error(
          ErrorCode::invalid_argument,
          fmt::format("{}: {} rows of {} coefficients with {} records were given; allowed are rows of {} with one "
                      "record each",
                      name, rows, width, records.size(), terms));
    for (const auto& record : records)
      if (!record.noise_spectrum.empty() && record.noise_spectrum.size() != nodes)
        throw Error(ErrorCode::invalid_argument,
                    fmt::format("{}: {}: the noise spectrum has {} values; allowed are none or {}", name, record.source,
                                record.noise_spectrum.size(), nodes));
  }

  std::size_t terms;
  std::size_t nodes;
  std::size_t images = 0;
  Hdf5Output output;
  std::string name;
  std::optional<Columns> columns;
};

CoefficientWriter::CoefficientWriter(const std::string& path, const DiskBasis& basis, const CoefficientHeader& header,
                                     bool overwrite)
    : state_(std::make_unique<State>(path, basis, header, overwrite)) {}

CoefficientWriter::~CoefficientWriter() = default;

void CoefficientWriter::append(MatrixView<const std::complex<double>> coefficients,
                               const std::vector<CoefficientRecord>& records) {
  state_->append(coefficients, records);
}

void CoefficientWriter::append(MatrixView<const std::complex<float>> coefficients,
                               const std::vector<CoefficientRecord>& records) {
  state_->append(coefficients, records);
}

void CoefficientWriter::finish(const Provenance& provenance) {
  if (!state_->columns) throw Error(ErrorCode::invalid_argument, state_->name + ": the file was finished already");
  state_->output.run([&] { layout::write_provenance(state_->output.file(), provenance); });
  state_->columns.reset();
  state_->output.finish();
}

}  // namespace tambour
