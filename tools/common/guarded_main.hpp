// From exceptions to exit codes: the only place where a tool catches.
#pragma once

#include <ostream>
#include <string>
#include <vector>

namespace tambour::tools {

/// Arguments after the program's name.
using Arguments = std::vector<std::string>;

/// The body of a tool: returns an exit code or throws.
using Run = int (*)(const Arguments& arguments, std::ostream& out, std::ostream& err);

/// Calls `run`; an exception becomes one sentence on `err` and its exit code. An `out` that could not be written is
/// exit code 3.
int guarded_run(const std::string& tool, Run run, const Arguments& arguments, std::ostream& out, std::ostream& err);

/// main() of every tool: installs the signal handlers and calls guarded_run on the process' streams.
int guarded_main(int argc, char** argv, const std::string& tool, Run run);

}  // namespace tambour::tools
