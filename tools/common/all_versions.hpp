// Every library underneath, with its version.
#pragma once

#include "tambour/provenance.hpp"
#include "tambour/version.hpp"

namespace tambour::tools {

inline std::vector<std::pair<std::string, std::string>> all_library_versions() {
  auto all = numeric_library_versions();
  for (auto& entry : library_versions()) all.push_back(std::move(entry));
  return all;
}

}  // namespace tambour::tools
