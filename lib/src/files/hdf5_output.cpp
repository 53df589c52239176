#include "files/hdf5_output.hpp"

#include <algorithm>
#include <cstdlib>

#if H5_VERSION_GE(1, 13, 0)
#include <H5FDdevelop.h>
#endif

#include "files/refuse.hpp"

namespace tambour {

struct Hdf5Output::Sink {
  Sink(const std::string& path, bool overwrite) : file(path, overwrite) {}
  AtomicFile file;
  std::string failure;  // the first
};

namespace {

// HDF5 wants its own part first, and allocates and frees nothing of it.
struct DriverFile {
  H5FD_t base;
  Hdf5Output::Sink* sink;
  haddr_t allocated;
  haddr_t end;
};

DriverFile* own(H5FD_t* file) { return reinterpret_cast<DriverFile*>(file); }
const DriverFile* own(const H5FD_t* file) { return reinterpret_cast<const DriverFile*>(file); }

H5FD_t* open_file(const char*, unsigned, hid_t access, haddr_t) {
  const auto* sink = static_cast<Hdf5Output::Sink* const*>(H5Pget_driver_info(access));
  if (sink == nullptr || *sink == nullptr) return nullptr;
  auto* file = new DriverFile{};
  file->sink = *sink;
  file->end = (*sink)->file.size();
  return &file->base;
}

herr_t close_file(H5FD_t* file) {
  delete own(file);
  return 0;
}

int compare(const H5FD_t* left, const H5FD_t* right) {
  return own(left)->sink == own(right)->sink ? 0 : std::less<>{}(own(left)->sink, own(right)->sink) ? -1 : 1;
}

herr_t query(const H5FD_t*, unsigned long* flags) {
  if (flags != nullptr)
    *flags = H5FD_FEAT_AGGREGATE_METADATA | H5FD_FEAT_ACCUMULATE_METADATA | H5FD_FEAT_DATA_SIEVE |
             H5FD_FEAT_AGGREGATE_SMALLDATA;
  return 0;
}

haddr_t get_allocated(const H5FD_t* file, H5FD_mem_t) { return own(file)->allocated; }

herr_t set_allocated(H5FD_t* file, H5FD_mem_t, haddr_t address) {
  own(file)->allocated = address;
  return 0;
}

haddr_t get_end(const H5FD_t* file, H5FD_mem_t) { return own(file)->end; }

herr_t read_file(H5FD_t* file, H5FD_mem_t, hid_t, haddr_t address, std::size_t size, void* buffer) {
  try {
    own(file)->sink->file.read(address, {static_cast<std::byte*>(buffer), size});
    return 0;
  } catch (const std::exception&) {
    return -1;
  }
}

herr_t write_file(H5FD_t* file, H5FD_mem_t, hid_t, haddr_t address, std::size_t size, const void* buffer) {
  auto& sink = *own(file)->sink;
  own(file)->end = std::max(own(file)->end, address + size);
  if (!sink.failure.empty()) return 0;
  try {
    sink.file.write(address, {static_cast<const std::byte*>(buffer), size});
  } catch (const std::exception& error) {
    sink.failure = error.what();
  }
  return 0;
}

// The file ends with the last byte written; HDF5 wants it to end with the last byte allocated.
herr_t truncate_file(H5FD_t* file, hid_t, hbool_t) {
  auto& state = *own(file);
  if (state.allocated > state.end) {
    const std::byte zero{};
    return write_file(file, H5FD_MEM_DEFAULT, H5P_DEFAULT, state.allocated - 1, 1, &zero);
  }
  return 0;
}

hid_t driver() {
  static const hid_t id = [] {
    static H5FD_class_t driver_class{};
#if H5_VERSION_GE(1, 13, 0)
    driver_class.version = H5FD_CLASS_VERSION;
    driver_class.value = static_cast<H5FD_class_value_t>(600);  // the range for unregistered drivers is 512 to 65535
#endif
    driver_class.name = "tambour_output";
    driver_class.maxaddr = (haddr_t{1} << 62) - 1;
    driver_class.fc_degree = H5F_CLOSE_STRONG;
    driver_class.fapl_size = sizeof(Hdf5Output::Sink*);
    driver_class.open = open_file;
    driver_class.close = close_file;
    driver_class.cmp = compare;
    driver_class.query = query;
    driver_class.get_eoa = get_allocated;
    driver_class.set_eoa = set_allocated;
    driver_class.get_eof = get_end;
    driver_class.read = read_file;
    driver_class.write = write_file;
    driver_class.truncate = truncate_file;
    // Every kind of data goes to the same place, as H5FD_FLMAP_DICHOTOMY groups it.
    const H5FD_mem_t groups[] = H5FD_FLMAP_DICHOTOMY;
    std::copy(std::begin(groups), std::end(groups), std::begin(driver_class.fl_map));
    return checked(H5FDregister(&driver_class), "register a file driver");
  }();
  return id;
}

}  // namespace

Hdf5Output::Hdf5Output(const std::string& path, bool overwrite) : sink_(std::make_unique<Sink>(path, overwrite)) {
  run([&] {
    const Hdf5Handle access(H5Pcreate(H5P_FILE_ACCESS), H5Pclose, "set up access");
    Sink* info = sink_.get();
    checked(H5Pset_driver(access.get(), driver(), &info), "set up access");
    // Times in the file would make equal runs give different files.
    const Hdf5Handle creation(H5Pcreate(H5P_FILE_CREATE), H5Pclose, "set up a file");
    checked(H5Pset_obj_track_times(creation.get(), false), "set up a file");
    file_ = Hdf5Handle(H5Fcreate(path.c_str(), H5F_ACC_TRUNC, creation.get(), access.get()), H5Fclose, "make the file");
  });
}

Hdf5Output::~Hdf5Output() = default;

void Hdf5Output::check() const {
  if (!sink_->failure.empty()) throw Error(ErrorCode::cannot_write, sink_->failure);
}

void Hdf5Output::finish() {
  run([&] {
    checked(H5Fflush(file_.get(), H5F_SCOPE_LOCAL), "write the file");
    check();
    file_.reset();
  });
  sink_->file.commit();
}

void Hdf5Output::refuse(const Hdf5Failure& failure) const {
  refuse_output("{}: cannot be written ({})", sink_->file.path(), failure.what());
}

}  // namespace tambour
