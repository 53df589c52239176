// The table of images of a symmetry run, and the summary of its verdicts.
#pragma once

#include <cstddef>
#include <map>
#include <string>
#include <utility>
#include <vector>

#include "common/session.hpp"
#include "tambour/stack_study.hpp"
#include "tambour/symmetry.hpp"

namespace tambour::tools {

/// What a row needs, without the bulk of an ImageStudy: a row waits until the angles are known.
struct ImageRow {
  std::size_t image = 0;
  std::string source;
  std::string status;
  bool ok = false;
  Centre centre;
  double se_x = 0;
  double se_y = 0;
  double noise_sd = 0;
  int fold = 0;
  double ln_bf = 0;
  double p_noise = 1;
  Verdict verdict = Verdict::skipped;
};

ImageRow row_of(const ImageStudy& study);

/// What was used, as comments, the header and the rows.
void write_image_table(const std::vector<ImageRow>& rows, const std::map<std::size_t, PatternAngle>& angles,
                       const StackStudyOptions& options, CsvWriter& table);

/// Counts of verdicts, those with a fold apart, as lines of the summary and in the JSON document.
void summarise(const std::vector<ImageRow>& rows, Session& session);

}  // namespace tambour::tools
