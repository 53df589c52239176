// Flags of the N-fold test.
#pragma once

#include <string>

#include "common/command_line.hpp"
#include "tambour/symmetry.hpp"

namespace tambour::tools {

/// --folds, --alpha.
class SymmetryFlags {
 public:
  void add_to(CommandLine& line);
  SymmetryOptions resolve() const;

 private:
  std::string folds_ = "2:24";
  double alpha_ = SymmetryOptions{}.alpha;
};

}  // namespace tambour::tools
