// The table of centres.
#pragma once

#include <string>
#include <vector>

#include "common/csv_writer.hpp"
#include "tambour/stack_study.hpp"

namespace tambour::tools {

/// What was used, as comments, and the header: image,x,y,se_x,se_y,cov_xy,status.
void write_centre_header(const StackStudyOptions& options, CsvWriter& table);

/// Cells of one image; those of a skipped one are empty but for its number and status.
std::vector<std::string> centre_row(const ImageStudy& study);

}  // namespace tambour::tools
