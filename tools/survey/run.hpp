// tambour-survey: the whole job on a stack: centres, symmetry, spectra, descriptors, report.
#pragma once

#include <ostream>

#include "common/guarded_main.hpp"

namespace tambour::tools::survey {

/// Returns an exit code or throws Error.
int run(const Arguments& arguments, std::ostream& out, std::ostream& err);

}  // namespace tambour::tools::survey
