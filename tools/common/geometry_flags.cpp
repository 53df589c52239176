#include "common/geometry_flags.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "common/parse.hpp"
#include "tambour/disk_transform.hpp"
#include "tambour/error.hpp"
#include "tambour/radius.hpp"

namespace tambour::tools {
namespace {

constexpr double smallest_radius = 4;  // px, until the stack has been looked at

}  // namespace

void GeometryFlags::add_to(CommandLine& line, Radius radius, double default_bandlimit) {
  bandlimit_ = default_bandlimit;
  may_be_auto_ = radius == Radius::number_or_auto;
  if (may_be_auto_) {
    radius_ = "auto";
    line.add_text("--radius", radius_, "NUMBER|auto", "Radius of the disk in pixels, or auto: from the stack itself");
  } else {
    line.add_text("--radius", radius_, "NUMBER", "Radius of the disk in pixels");
    line.require("--radius");
  }
  line.add_choice("--edge", edge_, {to_string(Edge::dirichlet), to_string(Edge::neumann)},
                  "Condition at the rim: dirichlet for isolated objects, neumann for fields that fill the disk");
  line.add_number("--bandlimit", bandlimit_, "Share of the pixel band that is used, 0 to 1");
  line.add_check([this] { geometry(); });
}

bool GeometryFlags::automatic() const { return may_be_auto_ && radius_ == "auto"; }

DiskGeometry GeometryFlags::geometry() const {
  DiskGeometry geometry;
  geometry.edge = edge_ == to_string(Edge::neumann) ? Edge::neumann : Edge::dirichlet;
  geometry.bandlimit = bandlimit_;
  geometry.radius = automatic() ? smallest_radius : parse_number("--radius", radius_);
  refuse_if_any(geometry.problems());
  return geometry;
}

DiskGeometry GeometryFlags::resolve(const ImageSource& source, double search, Session& session) const {
  DiskGeometry geometry = this->geometry();
  if (automatic()) {
    const RadiusEstimate found = estimate_radius(source, search, session.executor());
    geometry.radius = found.radius;
    session.remark(fmt::format("radius {:.6g} px taken from {} images: {}", found.radius, found.images,
                               found.object_ends
                                   ? "the objects end inside it"
                                   : "the largest that leaves room for --search, the objects may reach further"));
  }
  return geometry;
}

void require_disk_in_frame(const ImageSource& source, Centre centre, double radius) {
  const ImageStatus fits = disk_in_frame(centre, radius, source.rows(), source.columns());
  if (!fits.ok()) throw Error(ErrorCode::bad_input, fmt::format("{}: {}", source.name(0), fits.reason));
}

void require_room_to_search(const ImageSource& source, double radius) {
  constexpr double step = 1;  // px
  const Centre middle = frame_middle(source.rows(), source.columns());
  require_disk_in_frame(source, middle, radius);
  if (!disk_in_frame(middle, radius + step, source.rows(), source.columns()).ok())
    throw Error(
        ErrorCode::bad_input,
        fmt::format("{}: radius is {:.10g} px; allowed is up to {:.10g} px, which leaves a pixel to search for the "
                    "centre in a frame of {} by {} px",
                    source.name(0), radius, static_cast<double>(std::min(source.rows(), source.columns())) / 2 - step,
                    source.columns(), source.rows()));
}

}  // namespace tambour::tools
