// HDF5 behind one lock, handles that close themselves, and its complaints as exceptions.
#pragma once

#include <hdf5.h>

#include <mutex>
#include <optional>
#include <stdexcept>
#include <string>
#include <utility>
#include <vector>

namespace tambour {

/// Held around every call of HDF5 in the process, closing included: the library may have been built without support for
/// threads. While it is held HDF5 prints nothing. May be taken again by the thread that has it.
class Hdf5Lock {
 public:
  Hdf5Lock();
  ~Hdf5Lock();
  Hdf5Lock(const Hdf5Lock&) = delete;
  Hdf5Lock& operator=(const Hdf5Lock&) = delete;

 private:
  std::unique_lock<std::recursive_mutex> lock_;
  H5E_auto2_t reporter_ = nullptr;
  void* reporter_data_ = nullptr;
};

/// What HDF5 complained about; callers add the file's name.
class Hdf5Failure : public std::runtime_error {
 public:
  using std::runtime_error::runtime_error;
};

/// Throws Hdf5Failure "TASK (what HDF5 says)" if the result of a call is negative.
template <class Result>
Result checked(Result result, const char* task);
extern template herr_t checked(herr_t, const char*);
extern template hid_t checked(hid_t, const char*);
extern template hssize_t checked(hssize_t, const char*);

/// Owns one identifier of HDF5. Takes the lock to close it.
class Hdf5Handle {
 public:
  using Closer = herr_t (*)(hid_t);

  Hdf5Handle() = default;
  /// Throws Hdf5Failure if `id` is negative.
  Hdf5Handle(hid_t id, Closer closer, const char* task);
  ~Hdf5Handle() { reset(); }
  Hdf5Handle(Hdf5Handle&& other) noexcept : id_(std::exchange(other.id_, H5I_INVALID_HID)), closer_(other.closer_) {}
  Hdf5Handle& operator=(Hdf5Handle&& other) noexcept;

  hid_t get() const noexcept { return id_; }
  void reset() noexcept;

 private:
  hid_t id_ = H5I_INVALID_HID;
  Closer closer_ = nullptr;
};

// All that follows is to be called with the lock held and throws Hdf5Failure.

Hdf5Handle open_hdf5_file(const std::string& path);
Hdf5Handle open_dataset(hid_t place, const std::string& name);
Hdf5Handle simple_space(const std::vector<hsize_t>& dimensions);
/// The selection of `count` elements from `start` on of a dataset's space.
Hdf5Handle selected_space(hid_t dataset, const std::vector<hsize_t>& start, const std::vector<hsize_t>& count);
std::vector<hsize_t> dimensions_of(hid_t dataset);
/// UTF-8 strings of any length.
Hdf5Handle string_type();

void write_attribute(hid_t object, const char* name, double value);
void write_attribute(hid_t object, const char* name, long long value);
void write_attribute(hid_t object, const char* name, const std::string& value);

/// Nothing when the attribute is absent. A first element is taken where there are several.
std::optional<double> read_number_attribute(hid_t object, const char* name);
std::optional<std::string> read_text_attribute(hid_t object, const char* name);

/// Strings of a whole dataset, or of the selection.
std::vector<std::string> read_strings(hid_t dataset, hid_t memory_space, hid_t file_space, std::size_t count);
void write_strings(hid_t dataset, hid_t memory_space, hid_t file_space, const std::vector<std::string>& values);

}  // namespace tambour
