#include "common/symmetry_flags.hpp"

#include <fmt/format.h>

#include <tuple>

#include "common/parse.hpp"

namespace tambour::tools {

void SymmetryFlags::add_to(CommandLine& line) {
  line.add_text("--folds", folds_, "FIRST:LAST",
                "Folds that are weighed against each other (default 2:24, less where the disk is too small)");
  line.add_number("--alpha", alpha_, "p_noise below this gives best_supported");
  line.add_check([this] { refuse_if_any(resolve().problems()); });
}

SymmetryOptions SymmetryFlags::resolve() const {
  SymmetryOptions options;
  if (!folds_.empty()) std::tie(options.first_fold, options.last_fold) = parse_range("--folds", folds_);
  options.alpha = alpha_;
  return options;
}

SymmetryOptions SymmetryFlags::resolve(const DiskGeometry& geometry, Session& session) const {
  SymmetryOptions options = resolve();
  const int highest = DiskBasis(geometry).max_order();
  if (folds_.empty() && options.last_fold > highest && highest >= options.first_fold) {
    options.last_fold = highest;
    session.remark(fmt::format("folds {} to {} are weighed: the disk holds no higher angular order", options.first_fold,
                               options.last_fold));
  }
  return options;
}

}  // namespace tambour::tools
