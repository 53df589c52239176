// Short ways to refuse a bad argument.
#pragma once

#include <fmt/format.h>

#include <string>
#include <vector>

#include "tambour/error.hpp"

namespace tambour {

/// Throws Error(invalid_argument) "NAME is VALUE; allowed is ALLOWED" unless `fine`.
template <class Value>
void require(bool fine, const char* name, const Value& value, const std::string& allowed) {
  if (fine) return;
  throw Error(ErrorCode::invalid_argument, fmt::format("{} is {}; allowed is {}", name, value, allowed),
              fmt::format("{}", value), allowed);
}

/// Throws Error(invalid_argument) naming every problem of an options struct, if there is any.
inline void refuse_if_any(const std::vector<std::string>& problems) {
  if (problems.empty()) return;
  std::string all;
  for (const auto& problem : problems) all += (all.empty() ? "" : "; ") + problem;
  throw Error(ErrorCode::invalid_argument, all);
}

}  // namespace tambour
