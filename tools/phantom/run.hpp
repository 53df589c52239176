// tambour-phantom: invented stacks with known truth.
#pragma once

#include <ostream>

#include "common/guarded_main.hpp"

namespace tambour::tools::phantom {

/// Returns an exit code or throws Error.
int run(const Arguments& arguments, std::ostream& out, std::ostream& err);

}  // namespace tambour::tools::phantom
