// The version of the library.
#pragma once

namespace tambour {

/// "major.minor.patch", as set once in the top CMakeLists.txt.
const char* version() noexcept;

}  // namespace tambour
