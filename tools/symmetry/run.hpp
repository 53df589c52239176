// tambour-symmetry: which rotational symmetry each image shows, and how surely.
#pragma once

#include <ostream>

#include "common/guarded_main.hpp"

namespace tambour::tools::symmetry {

/// Returns an exit code or throws Error.
int run(const Arguments& arguments, std::ostream& out, std::ostream& err);

}  // namespace tambour::tools::symmetry
