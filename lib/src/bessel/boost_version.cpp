#include "bessel/boost_version.hpp"

#include <algorithm>
#include <boost/version.hpp>

namespace tambour::bessel {

std::string boost_version() {
  std::string text = BOOST_LIB_VERSION;
  std::replace(text.begin(), text.end(), '_', '.');
  return text;
}

}  // namespace tambour::bessel
