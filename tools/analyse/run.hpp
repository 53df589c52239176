// tambour-analyse: images to Fourier-Bessel coefficients.
#pragma once

#include <ostream>

#include "common/guarded_main.hpp"

namespace tambour::tools::analyse {

/// Returns an exit code or throws Error.
int run(const Arguments& arguments, std::ostream& out, std::ostream& err);

}  // namespace tambour::tools::analyse
