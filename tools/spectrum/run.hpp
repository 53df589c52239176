// tambour-spectrum: rotational power per angular order, and per ring of radius.
#pragma once

#include <ostream>

#include "common/guarded_main.hpp"

namespace tambour::tools::spectrum {

/// Returns an exit code or throws Error.
int run(const Arguments& arguments, std::ostream& out, std::ostream& err);

}  // namespace tambour::tools::spectrum
