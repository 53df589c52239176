// Flags that fix the disk and its basis.
#pragma once

#include <string>

#include "common/command_line.hpp"
#include "common/session.hpp"
#include "tambour/disk_basis.hpp"
#include "tambour/executor.hpp"
#include "tambour/image_source.hpp"

namespace tambour::tools {

/// --radius (a number or `auto`), --edge, --bandlimit.
class GeometryFlags {
 public:
  enum class Radius { number, number_or_auto };

  /// With Radius::number the flag must be given; else `auto` is the default.
  void add_to(CommandLine& line, Radius radius, double default_bandlimit);
  /// `auto` looks at the stack, leaving `search` px of room, and says in a remark what it found.
  /// Whether the disk fits into the frame is not looked at.
  DiskGeometry resolve(const ImageSource& source, double search, Session& session) const;

 private:
  bool automatic() const;
  /// With the smallest radius in place of `auto`. Throws Error(invalid_argument).
  DiskGeometry geometry() const;

  std::string radius_;
  bool may_be_auto_ = false;
  std::string edge_ = "dirichlet";
  double bandlimit_ = 0;
};

/// Throws Error(bad_input) with the file's name unless the disk fits into the frame.
void require_disk_in_frame(const ImageSource& source, Centre centre, double radius);

/// Throws Error(bad_input) unless a disk in the frame's middle fits and can be moved by a pixel each way.
void require_room_to_search(const ImageSource& source, double radius);

}  // namespace tambour::tools
