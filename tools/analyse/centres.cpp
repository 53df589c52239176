#include "analyse/centres.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "common/geometry_flags.hpp"
#include "common/parse.hpp"
#include "tambour/error.hpp"
#include "tambour/files.hpp"

namespace tambour::tools::analyse {
namespace {

[[noreturn]] void refuse(const Table& table, std::size_t row, const std::string& what) {
  throw Error(ErrorCode::bad_input, fmt::format("{}, line {}: {}", table.path, table.lines[row], what));
}

std::size_t image_of_row(const Table& table, std::size_t row, std::size_t column, std::size_t images) {
  const double number = table.number(row, column);
  if (!(number >= 0) || number != std::floor(number) || number >= static_cast<double>(images))
    refuse(
        table, row,
        fmt::format("image is {}; allowed is 0 to {}, the images of the stack", table.rows[row][column], images - 1));
  return static_cast<std::size_t>(number);
}

}  // namespace

Centres read_centres(const std::string& path, std::size_t images) {
  const Table table = read_table(path);
  const std::size_t image_column = table.column("image");
  // centres.csv says x and y; images.csv, symmetry.csv and truth.csv, which hold more, say centre_x and centre_y.
  const bool long_names = std::find(table.columns.begin(), table.columns.end(), "centre_x") != table.columns.end();
  const std::size_t x_column = table.column(long_names ? "centre_x" : "x");
  const std::size_t y_column = table.column(long_names ? "centre_y" : "y");
  const auto status_place = std::find(table.columns.begin(), table.columns.end(), "status");
  const auto status_column = static_cast<std::size_t>(status_place - table.columns.begin());

  Centres centres;
  centres.file = path;
  centres.of_image.resize(images);
  centres.status.assign(images, ImageStatus{fmt::format("{} has no row for this image", path)});
  std::vector<bool> seen(images, false);
  for (std::size_t row = 0; row < table.rows.size(); ++row) {
    const std::size_t image = image_of_row(table, row, image_column, images);
    if (seen[image]) refuse(table, row, fmt::format("image {} has a second row; allowed is one", image));
    seen[image] = true;
    if (status_place != table.columns.end() && table.rows[row][status_column] != ImageStatus{}.text()) {
      centres.status[image].reason = table.rows[row][status_column];
      if (centres.status[image].ok()) centres.status[image].reason = fmt::format("{} gives it no status", path);
      continue;
    }
    const Centre centre{table.number(row, x_column), table.number(row, y_column)};
    if (!std::isfinite(centre.x) || !std::isfinite(centre.y))
      refuse(table, row, fmt::format("centre is {}, {}; allowed are finite numbers", centre.x, centre.y));
    centres.of_image[image] = centre;
    centres.status[image].reason.clear();
  }
  return centres;
}

void CentreFlags::add_to(CommandLine& line) {
  line.add_text("--centre", centre_, "X,Y", "Centre of all images in pixels (default: the frame's middle)");
  line.add_text("--centres", file_, "FILE", "Table with the columns image, x, y, such as tambour-locate writes");
  line.exclude("--centres", "--centre");
  line.add_check([this] {
    if (!centre_.empty()) parse_pair("--centre", centre_);
  });
}

Centres CentreFlags::resolve(const ImageSource& source, double radius, Session& session) const {
  if (!file_.empty()) return read_centres(file_, source.images());
  Centre shared = frame_middle(source.rows(), source.columns());
  if (!centre_.empty()) {
    const auto [x, y] = parse_pair("--centre", centre_);
    shared = {x, y};
  }
  require_disk_in_frame(source, shared, radius);
  session.result("centre", {shared.x, shared.y});
  session.say(fmt::format("centre ({:.10g}, {:.10g}) px{}", shared.x, shared.y,
                          centre_.empty() ? ": the middle of the frame" : ""));
  Centres centres;
  centres.of_image.assign(source.images(), shared);
  return centres;
}

}  // namespace tambour::tools::analyse
