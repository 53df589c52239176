// tambour-describe: numbers that do not change when the object is rotated.
#pragma once

#include <ostream>

#include "common/guarded_main.hpp"

namespace tambour::tools::describe {

/// Returns an exit code or throws Error.
int run(const Arguments& arguments, std::ostream& out, std::ostream& err);

}  // namespace tambour::tools::describe
