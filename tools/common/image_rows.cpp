#include "common/image_rows.hpp"

#include <fmt/format.h>

#include <cmath>

namespace tambour::tools {

ImageRow row_of(const ImageStudy& study) {
  ImageRow row;
  row.image = study.image;
  row.source = study.source;
  row.status = study.status.text();
  row.ok = study.status.ok() && study.evidence.has_value();
  if (!row.ok) return row;
  row.centre = study.centre.centre;
  row.se_x = std::sqrt(study.centre.var_x);
  row.se_y = std::sqrt(study.centre.var_y);
  row.noise_sd = study.noise_sd;
  row.fold = study.evidence->fold;
  row.ln_bf = study.evidence->ln_bf;
  row.p_noise = study.evidence->p_noise;
  row.verdict = study.evidence->verdict;
  return row;
}

void write_image_table(const std::vector<ImageRow>& rows, const std::map<std::size_t, PatternAngle>& angles,
                       const StackStudyOptions& options, CsvWriter& table) {
  table.comment(fmt::format("background used: {}", to_string(options.preparation.background)));
  table.comment("centre, se and radius in px; angle in degrees within 360/fold, growing with atan2(y - cy, x - cx)");
  table.comment(
      "p_noise: against noise and isotropic texture, not calibrated above 0.1; p_structure and q_value: not computed");
  table.row({"image", "source", "status", "centre_x", "centre_y", "se_x", "se_y", "radius", "noise_sd", "fold", "ln_bf",
             "p_noise", "p_structure", "q_value", "verdict", "angle", "se_angle"});
  for (const auto& row : rows) {
    std::vector<std::string> cells{std::to_string(row.image), text_cell(row.source), text_cell(row.status)};
    if (row.ok) {
      const auto found = angles.find(row.image);
      const bool has_angle = found != angles.end();
      cells.insert(cells.end(), {cell(row.centre.x), cell(row.centre.y), cell(row.se_x), cell(row.se_y),
                                 cell(options.geometry.radius), cell(row.noise_sd), std::to_string(row.fold),
                                 cell(row.ln_bf), cell(row.p_noise), "", "", to_string(row.verdict),
                                 has_angle ? cell(found->second.angle) : "", has_angle ? cell(found->second.se) : ""});
    } else {
      cells.insert(cells.end(), 11, "");
      cells.insert(cells.end(), {to_string(Verdict::skipped), "", ""});
    }
    table.row(cells);
  }
}

void summarise(const std::vector<ImageRow>& rows, Session& session) {
  std::map<int, std::size_t> supported;
  std::size_t inconclusive = 0;
  std::size_t skipped = 0;
  for (const auto& row : rows) {
    if (row.verdict == Verdict::best_supported)
      ++supported[row.fold];
    else
      ++(row.verdict == Verdict::inconclusive ? inconclusive : skipped);
  }
  auto folds = nlohmann::ordered_json::array();
  for (const auto& [fold, images] : supported) {
    session.say(fmt::format("  best_supported, {}-fold: {}", fold, images));
    folds.push_back({{"fold", fold}, {"images", images}});
  }
  session.say(fmt::format("  inconclusive: {}", inconclusive));
  session.say(fmt::format("  skipped: {}", skipped));
  session.result("verdicts", {{to_string(Verdict::best_supported), folds},
                              {to_string(Verdict::inconclusive), inconclusive},
                              {to_string(Verdict::skipped), skipped}});
  if (!supported.empty())
    session.say(
        "best_supported: more than noise, and this fold explains it best; a chance arrangement is not excluded. A "
        "result "
        "supports a trained judgement and does not replace it.");
}

}  // namespace tambour::tools
