// An HDF5 file being written, atomically, on disks that may run full.
#pragma once

#include <memory>
#include <string>

#include "files/hdf5_handle.hpp"
#include "files/output_file.hpp"

namespace tambour {

/// Writes through a file driver of our own. HDF5 1.10 crashes at the end of the process after a file could not be
/// closed because the disk was full; the driver therefore hides failures from HDF5 and keeps them for `check()`, after
/// which the whole file is thrown away. To be used with the HDF5 lock held, apart from construction and destruction.
class Hdf5Output {
 public:
  /// Throws Error(cannot_write).
  Hdf5Output(const std::string& path, bool overwrite);
  ~Hdf5Output();
  Hdf5Output(const Hdf5Output&) = delete;
  Hdf5Output& operator=(const Hdf5Output&) = delete;

  hid_t file() const noexcept { return file_.get(); }
  /// Throws Error(cannot_write) if any write has failed so far.
  void check() const;
  /// Closes the file (all other handles must be closed) and renames it into its place.
  void finish();

  /// Calls `work`, then check(); a failure of HDF5 becomes Error(cannot_write).
  template <class Work>
  void run(const Work& work) {
    const Hdf5Lock lock;
    try {
      work();
    } catch (const Hdf5Failure& failure) {
      check();
      refuse(failure);
    }
    check();
  }

  struct Sink;

 private:
  [[noreturn]] void refuse(const Hdf5Failure& failure) const;

  std::unique_ptr<Sink> sink_;
  Hdf5Handle file_;
};

}  // namespace tambour
