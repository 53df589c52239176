#include "common/centre_rows.hpp"

#include <fmt/format.h>

#include <cmath>

namespace tambour::tools {

void write_centre_header(const StackStudyOptions& options, CsvWriter& table) {
  table.comment(fmt::format("radius used: {:.10g} px", options.geometry.radius));
  table.comment(fmt::format("background used: {}", to_string(options.preparation.background)));
  table.comment("x = column, y = row, in px from the centre of the first pixel; se: standard error, cov_xy in px^2");
  table.row({"image", "x", "y", "se_x", "se_y", "cov_xy", "status"});
}

std::vector<std::string> centre_row(const ImageStudy& study) {
  const std::string image = std::to_string(study.image);
  const std::string status = text_cell(study.status.text());
  if (!study.status.ok()) return {image, "", "", "", "", "", status};
  const CentreEstimate& found = study.centre;
  return {image,
          cell(found.centre.x),
          cell(found.centre.y),
          cell(std::sqrt(found.var_x)),
          cell(std::sqrt(found.var_y)),
          cell(found.cov_xy),
          status};
}

}  // namespace tambour::tools
