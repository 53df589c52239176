// What a tool tells the shell.
#pragma once

namespace tambour::tools {

enum ExitCode : int {
  exit_done = 0,
  exit_usage = 2,         ///< wrong flags or values
  exit_files = 3,         ///< bad or missing input, or an output that cannot be written
  exit_skipped = 4,       ///< done, but more images were skipped than --max-skipped allows
  exit_fault = 70,        ///< a fault of the program itself
  exit_interrupted = 128  ///< plus the number of the signal: 130 for Ctrl-C, by the custom of shells
};

}  // namespace tambour::tools
