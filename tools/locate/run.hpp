// tambour-locate: the rotation centre of every image, with its covariance.
#pragma once

#include <ostream>

#include "common/guarded_main.hpp"

namespace tambour::tools::locate {

/// Returns an exit code or throws Error.
int run(const Arguments& arguments, std::ostream& out, std::ostream& err);

}  // namespace tambour::tools::locate
