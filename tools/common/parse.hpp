// Text of the command line to numbers, strictly: the whole text, finite, in base ten.
#pragma once

#include <cstdint>
#include <string>
#include <utility>
#include <vector>

namespace tambour::tools {

/// Throws Error(invalid_argument) naming `what` unless the text is one finite number.
double parse_number(const std::string& what, const std::string& text);
/// Throws Error(invalid_argument) naming `what` unless the text is one whole number.
std::int64_t parse_integer(const std::string& what, const std::string& text);
/// "A:B" or "A" (then both are A).
std::pair<int, int> parse_range(const std::string& what, const std::string& text);
/// "X,Y".
std::pair<double, double> parse_pair(const std::string& what, const std::string& text);
/// Parts between separators, spaces around them dropped.
std::vector<std::string> split(const std::string& text, char separator);

/// Throws Error(invalid_argument) naming every problem of an options struct, if there is any.
void refuse_if_any(const std::vector<std::string>& problems);

/// One word for a POSIX shell: quoted only when it has to be.
std::string shell_quote(const std::string& word);

}  // namespace tambour::tools
