// tambour-synthesise: coefficients to images.
#pragma once

#include <ostream>

#include "common/guarded_main.hpp"

namespace tambour::tools::synthesise {

/// Returns an exit code or throws Error.
int run(const Arguments& arguments, std::ostream& out, std::ostream& err);

}  // namespace tambour::tools::synthesise
