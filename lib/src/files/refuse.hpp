// Short ways to refuse a file.
#pragma once

#include <fmt/format.h>

#include <string>
#include <system_error>
#include <utility>

#include "tambour/error.hpp"

namespace tambour {

/// Throws Error(bad_input) with a formatted sentence.
template <class... Arguments>
[[noreturn]] void refuse_input(fmt::format_string<Arguments...> sentence, Arguments&&... arguments) {
  throw Error(ErrorCode::bad_input, fmt::format(sentence, std::forward<Arguments>(arguments)...));
}

/// Throws Error(cannot_write) with a formatted sentence.
template <class... Arguments>
[[noreturn]] void refuse_output(fmt::format_string<Arguments...> sentence, Arguments&&... arguments) {
  throw Error(ErrorCode::cannot_write, fmt::format(sentence, std::forward<Arguments>(arguments)...));
}

/// What the system says about an error number; unlike strerror() safe in threads.
inline std::string system_reason(int error_number) { return std::generic_category().message(error_number); }

}  // namespace tambour
