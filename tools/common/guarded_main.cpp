#include "common/guarded_main.hpp"

#include <fcntl.h>
#include <unistd.h>

#include <exception>
#include <iostream>
#include <new>

#include "common/exit_codes.hpp"
#include "common/interrupt.hpp"
#include "tambour/error.hpp"

namespace tambour::tools {
namespace {

int exit_code_of(ErrorCode code) {
  switch (code) {
    case ErrorCode::invalid_argument:
      return exit_usage;
    case ErrorCode::bad_input:
    case ErrorCode::cannot_write:
      return exit_files;
    case ErrorCode::interrupted:
      return exit_interrupted + interrupt_signal();
    case ErrorCode::internal:
      break;
  }
  return exit_fault;
}

/// A file opened while a standard stream is closed would take its number, and messages would end up in that file.
/// Opened for reading, so that writing to it still fails as it would have.
void occupy_closed_streams() {
  for (const int stream : {STDIN_FILENO, STDOUT_FILENO, STDERR_FILENO})
    if (fcntl(stream, F_GETFD) == -1 && open("/dev/null", O_RDONLY) != stream) return;
}

}  // namespace

int guarded_run(const std::string& tool, Run run, const Arguments& arguments, std::ostream& out, std::ostream& err) {
  int code = exit_fault;
  try {
    code = run(arguments, out, err);
    out.flush();
    if (!out) {
      err << tool << ": standard output cannot be written (closed, or the disk is full)\n";
      if (code == exit_done || code == exit_skipped) code = exit_files;
    }
  } catch (const Error& error) {
    code = exit_code_of(error.code());
    err << tool << ": " << error.what() << '\n';
    if (code == exit_usage) err << tool << ": see " << tool << " --help\n";
    if (code == exit_fault) err << tool << ": this is a fault of the program, please report it\n";
  } catch (const std::bad_alloc&) {
    err << tool << ": out of memory; fewer --threads or a smaller --batch need less\n";
  } catch (const std::exception& error) {
    err << tool << ": fault of the program, please report it: " << error.what() << '\n';
  }
  err.flush();
  return code;
}

int guarded_main(int argc, char** argv, const std::string& tool, Run run) {
  occupy_closed_streams();
  install_interrupt_handlers();
  Arguments arguments;
  if (argc > 1) arguments.assign(argv + 1, argv + argc);
  return guarded_run(tool, run, arguments, std::cout, std::cerr);
}

}  // namespace tambour::tools
