// Which Boost the room was built with.
#pragma once

#include <string>

namespace tambour::bessel {

/// "1.74" and the like.
std::string boost_version();

}  // namespace tambour::bessel
