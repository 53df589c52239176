#include "common/symmetry_flags.hpp"

#include <tuple>

#include "common/parse.hpp"

namespace tambour::tools {

void SymmetryFlags::add_to(CommandLine& line) {
  line.add_text("--folds", folds_, "FIRST:LAST", "Folds that are weighed against each other");
  line.add_number("--alpha", alpha_, "p_noise below this gives best_supported");
  line.add_check([this] { refuse_if_any(resolve().problems()); });
}

SymmetryOptions SymmetryFlags::resolve() const {
  SymmetryOptions options;
  std::tie(options.first_fold, options.last_fold) = parse_range("--folds", folds_);
  options.alpha = alpha_;
  return options;
}

}  // namespace tambour::tools
