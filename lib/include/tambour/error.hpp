// The one exception type of the library.
#pragma once

#include <stdexcept>
#include <string>

namespace tambour {

/// What kind of mistake an Error reports; the tools turn it into an exit code.
enum class ErrorCode {
  invalid_argument,  ///< a parameter outside its range, or views whose shapes disagree
  bad_input,         ///< a file that is missing, unreadable, truncated or contradicts itself
  cannot_write,      ///< an output that cannot be created, written or renamed
  interrupted,       ///< the caller asked the work to stop
  internal           ///< a fault of the library itself
};

/// Thrown on misuse and on input that cannot be used at all.
///
/// what() is one sentence for a person: it names the thing, the offending value and what is allowed.
/// value() and allowed() repeat these two for programs; either may be empty.
class Error : public std::runtime_error {
 public:
  Error(ErrorCode code, const std::string& sentence, std::string value = {}, std::string allowed = {});

  ErrorCode code() const noexcept { return code_; }
  const std::string& value() const noexcept { return value_; }
  const std::string& allowed() const noexcept { return allowed_; }

 private:
  ErrorCode code_;
  std::string value_;
  std::string allowed_;
};

}  // namespace tambour
