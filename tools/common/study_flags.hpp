// Flags of tools that run a stack through StackStudyPlan.
#pragma once

#include <string>

#include "common/command_line.hpp"
#include "tambour/stack_study.hpp"

namespace tambour::tools {

/// --batch always; --search and --precision where the tool has a use for them.
class StudyFlags {
 public:
  void add_batch(CommandLine& line);
  void add_search(CommandLine& line);
  void add_precision(CommandLine& line);

  /// Throws Error(invalid_argument) unless 1 .. 64 px.
  double search() const;
  /// Sets what the flags say. Throws Error(invalid_argument) listing every problem of the options as a whole.
  void apply(StackStudyOptions& options) const;

 private:
  double search_ = StackStudyOptions{}.search;
  std::string precision_ = "single";
  std::int64_t batch_ = 0;
};

}  // namespace tambour::tools
