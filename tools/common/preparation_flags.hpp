// Flags that say what is done to an image before it is expanded; the same for every tool.
#pragma once

#include <string>

#include "common/command_line.hpp"
#include "common/session.hpp"
#include "tambour/preparation.hpp"

namespace tambour::tools {

/// --background, --scaling, --invert-contrast.
class PreparationFlags {
 public:
  /// `default_background` holds where the user says nothing.
  void add_to(CommandLine& line, Background default_background);
  /// A default background that the frame leaves no room for becomes `none`, with a remark.
  /// Throws Error(invalid_argument) when the user asked for one that the frame leaves no room for.
  PreparationOptions resolve(std::ptrdiff_t rows, std::ptrdiff_t columns, double radius, Session& session) const;

 private:
  std::string background_;
  std::string scaling_ = "none";
  bool invert_ = false;
  const CommandLine* line_ = nullptr;
};

}  // namespace tambour::tools
