// The numbers behind the charts, as JSON for the page's script.
#pragma once

#include <string>

#include "report/facts.hpp"

namespace tambour::report {

/// Visibility at which the test finds half of the images, and four in five.
inline constexpr double kEvenOdds = 35;
inline constexpr double kFourInFive = 80;

/// Centres drawn at most; of longer lists an even selection is drawn.
inline constexpr std::size_t kCentresDrawn = 4000;

/// An object with the keys spectrum, evidence, centres, errors; charts without numbers are missing. What is not finite
/// is null. Safe inside a script element.
std::string chart_data(const ReportData& data, const Facts& facts);

}  // namespace tambour::report
