// Texts that the build puts into the library: see embed.cmake.
#pragma once

#include <string_view>

namespace tambour::report {

extern const std::string_view chart_version;  ///< of Chart.js
extern const std::string_view chart_script;   ///< Chart.js itself, with its notice
extern const std::string_view chart_licence;
extern const std::string_view limits_text;  ///< list of what the results can and cannot tell
extern const std::string_view page_style;
extern const std::string_view page_script;

}  // namespace tambour::report
