// Flags of every tool that reads images.
#pragma once

#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "common/command_line.hpp"
#include "common/session.hpp"
#include "tambour/files.hpp"

namespace tambour::tools {

/// IMAGES…, --channel, --pixel-size, --unit.
class ImageFlags {
 public:
  void add_to(CommandLine& line);
  /// Opens the stack, passes its remarks to the session and refuses image sizes that no transform takes.
  std::unique_ptr<FileSource> open(Session& session) const;

 private:
  std::vector<std::string> inputs_;
  std::optional<std::int64_t> channel_;
  std::optional<double> pixel_size_;
  std::string unit_;
};

/// --pixel-size and --unit as one value; nothing when --pixel-size is not given.
/// Throws Error(invalid_argument) unless the size is positive, or for a unit without a size.
std::optional<PixelSize> pixel_size_of(const std::optional<double>& value, const std::string& unit);

}  // namespace tambour::tools
