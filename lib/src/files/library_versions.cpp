#include <fmt/format.h>
#include <hdf5.h>
#include <openssl/crypto.h>
#include <tiffio.h>

#include <opencv2/core/utility.hpp>
#include <string_view>

#include "files/hdf5_handle.hpp"
#include "tambour/provenance.hpp"

namespace tambour {
namespace {

std::string hdf5_version() {
  const Hdf5Lock lock;
  unsigned major = 0, minor = 0, release = 0;
  H5get_libversion(&major, &minor, &release);
  return fmt::format("{}.{}.{}", major, minor, release);
}

// The library tells "LIBTIFF, Version 4.5.0" and lines of copyright.
std::string tiff_version() {
  std::string_view text = TIFFGetVersion();
  text = text.substr(0, text.find('\n'));
  return std::string(text.substr(text.rfind(' ') + 1));
}

}  // namespace

std::vector<std::pair<std::string, std::string>> library_versions() {
  return {{"HDF5", hdf5_version()},
          {"libtiff", tiff_version()},
          {"OpenCV", cv::getVersionString()},
          {"OpenSSL", OpenSSL_version(OPENSSL_VERSION_STRING)},
          {"fmt", fmt::format("{}.{}.{}", FMT_VERSION / 10000, FMT_VERSION / 100 % 100, FMT_VERSION % 100)}};
}

}  // namespace tambour
