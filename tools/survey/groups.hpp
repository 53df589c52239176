// The report's groups: images of one verdict and fold, turned so that their patterns agree.
#pragma once

#include <map>
#include <vector>

#include "common/image_rows.hpp"
#include "common/session.hpp"
#include "tambour/report.hpp"
#include "tambour/stack_study.hpp"

namespace tambour::tools::survey {

/// Reads the coefficients of a survey once more, turns every image of a supported fold by its angle (a_nk e^{+i n
/// angle}, so no pixel is interpolated) and rebuilds means and a few examples in the frame's middle. The largest groups
/// come first.
std::vector<ReportGroup> make_groups(const std::string& coefficient_file, const StackStudyPlan& plan,
                                     const std::vector<ImageRow>& rows,
                                     const std::map<std::size_t, PatternAngle>& angles, Session& session);

}  // namespace tambour::tools::survey
