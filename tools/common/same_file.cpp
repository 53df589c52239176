#include "common/same_file.hpp"

#include <fmt/format.h>

#include <filesystem>

#include "tambour/error.hpp"

namespace tambour::tools {

void refuse_inputs_as_outputs(const std::vector<std::string>& inputs, const std::vector<std::string>& outputs) {
  for (const std::string& output : outputs) {
    for (const std::string& input : inputs) {
      std::error_code not_there;
      if (std::filesystem::equivalent(input, output, not_there))
        throw Error(ErrorCode::bad_input, fmt::format("{}: is an input and cannot be an output as well", output));
    }
  }
}

}  // namespace tambour::tools
