// Flags of the N-fold test.
#pragma once

#include <string>

#include "common/command_line.hpp"
#include "common/session.hpp"
#include "tambour/symmetry.hpp"

namespace tambour::tools {

/// --folds, --alpha.
class SymmetryFlags {
 public:
  void add_to(CommandLine& line);
  /// A default range that goes beyond the basis of `geometry` is shortened, with a remark.
  SymmetryOptions resolve(const DiskGeometry& geometry, Session& session) const;

 private:
  SymmetryOptions resolve() const;

  std::string folds_;  ///< empty = the default
  double alpha_ = SymmetryOptions{}.alpha;
};

}  // namespace tambour::tools
