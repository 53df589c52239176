// Which centre each image is expanded about.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "common/command_line.hpp"
#include "common/session.hpp"
#include "tambour/disk_basis.hpp"
#include "tambour/image_source.hpp"
#include "tambour/status.hpp"

namespace tambour::tools::analyse {

struct Centres {
  std::vector<Centre> of_image;     ///< one per image
  std::vector<ImageStatus> status;  ///< why an image has none; empty when all have one
  std::optional<std::string> file;  ///< table they were read from, for hashing
};

/// --centre X,Y and --centres FILE; without either the middle of the frame.
class CentreFlags {
 public:
  void add_to(CommandLine& line);
  /// One centre for all images must hold a disk of `radius` within the frame, else Error(bad_input). Says which centre
  /// was taken.
  Centres resolve(const ImageSource& source, double radius, Session& session) const;

 private:
  std::string centre_;
  std::string file_;
};

/// Reads a table with the columns image, x, y (or centre_x, centre_y) and, if there is one, status: images whose status
/// is not `ok`, and images without a row, get their reason. Throws Error(bad_input): an image that the stack does not
/// have, or that has two rows; a centre that is no number.
Centres read_centres(const std::string& path, std::size_t images);

}  // namespace tambour::tools::analyse
