// The version of the library.
#pragma once

#include <string>
#include <utility>
#include <vector>

namespace tambour {

/// "major.minor.patch", as set once in the top CMakeLists.txt.
const char* version() noexcept;

/// Names and versions of the libraries that the numbers rest on: FFTW, Boost, Eigen. Those behind the files: see
/// provenance.hpp.
std::vector<std::pair<std::string, std::string>> numeric_library_versions();

}  // namespace tambour
