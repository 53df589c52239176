#include "tambour/error.hpp"

#include <utility>

namespace tambour {

Error::Error(ErrorCode code, const std::string& sentence, std::string value, std::string allowed)
    : std::runtime_error(sentence), code_(code), value_(std::move(value)), allowed_(std::move(allowed)) {}

}  // namespace tambour
