#include "tambour/version.hpp"

namespace tambour {

const char* version() noexcept { return TAMBOUR_VERSION; }

}  // namespace tambour
