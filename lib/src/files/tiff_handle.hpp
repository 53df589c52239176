// libtiff handles over our own reading and writing, with their complaints caught.
#pragma once

#include <tiffio.h>

#include <cstdint>
#include <memory>
#include <string>

#include "files/output_file.hpp"
#include "files/read_file.hpp"

namespace tambour {

/// An open TIFF file. Nothing is printed: the first error since the last call of `take_error` is kept. Not thread-safe.
class TiffHandle {
 public:
  /// For reading; no directory is loaded yet. Throws Error(bad_input).
  explicit TiffHandle(std::shared_ptr<const ReadFile> file);
  /// For writing into `file`. Throws Error(cannot_write).
  TiffHandle(AtomicFile& file, bool big_tiff);
  ~TiffHandle();

  TIFF* get() const noexcept;
  /// The first complaint, or "unknown reason", and forgets it.
  std::string take_error();
  bool has_error() const noexcept;
  /// Writes what is left and ends the handle.
  void close();

  struct Client;

 private:
  void open(const char* mode);
  std::unique_ptr<Client> client_;
  TIFF* tiff_ = nullptr;
};

}  // namespace tambour
