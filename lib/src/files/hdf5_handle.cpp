#include "files/hdf5_handle.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <string_view>

namespace tambour {
namespace {

// Never destroyed: handles in static objects may be closed after everything else.
std::recursive_mutex& mutex() {
  static auto* const the_mutex = new std::recursive_mutex;
  return *the_mutex;
}

herr_t keep_deepest(unsigned, const H5E_error2_t* error, void* text) {
  auto& deepest = *static_cast<std::string*>(text);
  if (deepest.empty() && error->desc != nullptr) deepest = error->desc;
  return 0;
}

std::string complaint() {
  std::string text;
  // Upward: from the call where it went wrong.
  H5Ewalk2(H5E_DEFAULT, H5E_WALK_UPWARD, keep_deepest, &text);
  H5Eclear2(H5E_DEFAULT);
  return text.empty() ? "no reason told" : text;
}

Hdf5Handle write_scalar_attribute(hid_t object, const char* name, hid_t type) {
  const Hdf5Handle space(H5Screate(H5S_SCALAR), H5Sclose, "make a scalar");
  return {H5Acreate2(object, name, type, space.get(), H5P_DEFAULT, H5P_DEFAULT), H5Aclose, "make an attribute"};
}

std::optional<Hdf5Handle> open_attribute(hid_t object, const char* name) {
  if (checked(H5Aexists(object, name), "look for an attribute") == 0) return std::nullopt;
  return Hdf5Handle(H5Aopen(object, name, H5P_DEFAULT), H5Aclose, "open an attribute");
}

std::size_t element_count(hid_t attribute) {
  const Hdf5Handle space(H5Aget_space(attribute), H5Sclose, "examine an attribute");
  return static_cast<std::size_t>(checked(H5Sget_simple_extent_npoints(space.get()), "examine an attribute"));
}

}  // namespace

Hdf5Lock::Hdf5Lock() : lock_(mutex()) {
  H5Eget_auto2(H5E_DEFAULT, &reporter_, &reporter_data_);
  H5Eset_auto2(H5E_DEFAULT, nullptr, nullptr);
}

Hdf5Lock::~Hdf5Lock() { H5Eset_auto2(H5E_DEFAULT, reporter_, reporter_data_); }

template <class Result>
Result checked(Result result, const char* task) {
  if (result < 0) throw Hdf5Failure(fmt::format("HDF5 failed to {}: {}", task, complaint()));
  return result;
}
template herr_t checked(herr_t, const char*);
template hid_t checked(hid_t, const char*);
template hssize_t checked(hssize_t, const char*);

Hdf5Handle::Hdf5Handle(hid_t id, Closer closer, const char* task) : id_(checked(id, task)), closer_(closer) {}

Hdf5Handle& Hdf5Handle::operator=(Hdf5Handle&& other) noexcept {
  if (this != &other) {
    reset();
    id_ = std::exchange(other.id_, H5I_INVALID_HID);
    closer_ = other.closer_;
  }
  return *this;
}

void Hdf5Handle::reset() noexcept {
  if (id_ < 0) return;
  const Hdf5Lock lock;
  closer_(std::exchange(id_, H5I_INVALID_HID));
}

Hdf5Handle open_hdf5_file(const std::string& path) {
  const Hdf5Handle access(H5Pcreate(H5P_FILE_ACCESS), H5Pclose, "set up access");
  // File systems without locks are common in clusters; reading needs none.
  H5Pset_file_locking(access.get(), true, true);
  return {H5Fopen(path.c_str(), H5F_ACC_RDONLY, access.get()), H5Fclose, "open the file"};
}

Hdf5Handle open_dataset(hid_t place, const std::string& name) {
  return {H5Dopen2(place, name.c_str(), H5P_DEFAULT), H5Dclose, "open a dataset"};
}

Hdf5Handle simple_space(const std::vector<hsize_t>& dimensions) {
  return {H5Screate_simple(static_cast<int>(dimensions.size()), dimensions.data(), nullptr), H5Sclose,
          "describe an array"};
}

Hdf5Handle selected_space(hid_t dataset, const std::vector<hsize_t>& start, const std::vector<hsize_t>& count) {
  Hdf5Handle space(H5Dget_space(dataset), H5Sclose, "examine a dataset");
  checked(H5Sselect_hyperslab(space.get(), H5S_SELECT_SET, start.data(), nullptr, count.data(), nullptr),
          "select a part of a dataset");
  return space;
}

std::vector<hsize_t> dimensions_of(hid_t dataset) {
  const Hdf5Handle space(H5Dget_space(dataset), H5Sclose, "examine a dataset");
  if (H5Sget_simple_extent_type(space.get()) != H5S_SIMPLE) return {};
  const int rank = checked(H5Sget_simple_extent_ndims(space.get()), "examine a dataset");
  std::vector<hsize_t> dimensions(static_cast<std::size_t>(rank));
  checked(H5Sget_simple_extent_dims(space.get(), dimensions.data(), nullptr), "examine a dataset");
  return dimensions;
}

Hdf5Handle string_type() {
  Hdf5Handle type(H5Tcopy(H5T_C_S1), H5Tclose, "make a type");
  checked(H5Tset_size(type.get(), H5T_VARIABLE), "make a type");
  checked(H5Tset_cset(type.get(), H5T_CSET_UTF8), "make a type");
  return type;
}

void write_attribute(hid_t object, const char* name, double value) {
  const auto attribute = write_scalar_attribute(object, name, H5T_IEEE_F64LE);
  checked(H5Awrite(attribute.get(), H5T_NATIVE_DOUBLE, &value), "write an attribute");
}

void write_attribute(hid_t object, const char* name, long long value) {
  const auto attribute = write_scalar_attribute(object, name, H5T_STD_I64LE);
  checked(H5Awrite(attribute.get(), H5T_NATIVE_LLONG, &value), "write an attribute");
}

void write_attribute(hid_t object, const char* name, const std::string& value) {
  const auto type = string_type();
  const auto attribute = write_scalar_attribute(object, name, type.get());
  const char* text = value.c_str();
  checked(H5Awrite(attribute.get(), type.get(), &text), "write an attribute");
}

std::optional<double> read_number_attribute(hid_t object, const char* name) {
  const auto attribute = open_attribute(object, name);
  if (!attribute) return std::nullopt;
  const Hdf5Handle type(H5Aget_type(attribute->get()), H5Tclose, "examine an attribute");
  const auto kind = H5Tget_class(type.get());
  const std::size_t count = element_count(attribute->get());
  constexpr std::size_t most = 1000;
  if ((kind != H5T_INTEGER && kind != H5T_FLOAT) || count == 0 || count > most) return std::nullopt;
  std::vector<double> values(count);
  checked(H5Aread(attribute->get(), H5T_NATIVE_DOUBLE, values.data()), "read an attribute");
  return values[0];
}

std::optional<std::string> read_text_attribute(hid_t object, const char* name) {
  const auto attribute = open_attribute(object, name);
  if (!attribute) return std::nullopt;
  const Hdf5Handle type(H5Aget_type(attribute->get()), H5Tclose, "examine an attribute");
  if (H5Tget_class(type.get()) != H5T_STRING || element_count(attribute->get()) != 1) return std::nullopt;
  if (checked(H5Tis_variable_str(type.get()), "examine an attribute") > 0) {
    char* text = nullptr;
    const Hdf5Handle memory(H5Tget_native_type(type.get(), H5T_DIR_ASCEND), H5Tclose, "examine an attribute");
    checked(H5Aread(attribute->get(), memory.get(), &text), "read an attribute");
    std::string value = text == nullptr ? "" : text;
    H5free_memory(text);
    return value;
  }
  std::string value(H5Tget_size(type.get()), '\0');
  checked(H5Aread(attribute->get(), type.get(), value.data()), "read an attribute");
  value.resize(std::min(value.find('\0'), value.size()));
  value.resize(value.find_last_not_of(' ') + 1);
  return value;
}

std::vector<std::string> read_strings(hid_t dataset, hid_t memory_space, hid_t file_space, std::size_t count) {
  std::vector<std::string> values(count);
  if (count == 0) return values;
  const Hdf5Handle stored(H5Dget_type(dataset), H5Tclose, "examine a dataset");
  if (H5Tget_class(stored.get()) != H5T_STRING || H5Tis_variable_str(stored.get()) <= 0)
    throw Hdf5Failure("strings of variable length were expected");
  const auto type = string_type();
  std::vector<char*> texts(count, nullptr);
  checked(H5Dread(dataset, type.get(), memory_space, file_space, H5P_DEFAULT, texts.data()), "read strings");
  for (std::size_t i = 0; i < count; ++i) {
    if (texts[i] != nullptr) values[i] = texts[i];
    H5free_memory(texts[i]);
  }
  return values;
}

void write_strings(hid_t dataset, hid_t memory_space, hid_t file_space, const std::vector<std::string>& values) {
  if (values.empty()) return;
  const auto type = string_type();
  std::vector<const char*> texts;
  for (const auto& value : values) texts.push_back(value.c_str());
  checked(H5Dwrite(dataset, type.get(), memory_space, file_space, H5P_DEFAULT, texts.data()), "write strings");
}

}  // namespace tambour
