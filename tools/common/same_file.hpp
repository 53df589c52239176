// An output must not be one of the inputs.
#pragma once

#include <string>
#include <vector>

namespace tambour::tools {

/// Throws Error(bad_input) when an output is the same file as an input, whatever the two are called.
void refuse_inputs_as_outputs(const std::vector<std::string>& inputs, const std::vector<std::string>& outputs);

}  // namespace tambour::tools
