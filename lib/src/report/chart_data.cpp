#include "report/chart_data.hpp"

#include <algorithm>
#include <cmath>
#include <nlohmann/json.hpp>

#include "report/text.hpp"

namespace tambour::report {
namespace {

using nlohmann::json;

json number(double value) { return std::isfinite(value) ? json(value) : json(nullptr); }

// A thousandth of a pixel is more than a screen shows, and keeps the page small.
json rounded(double value) { return number(std::round(value * 1000) / 1000); }

json numbers(const std::vector<double>& values) {
  json list = json::array();
  for (const double value : values) list.push_back(number(value));
  return list;
}

json spectrum(const ReportData& data, const Facts& facts) {
  json order = json::array(), power = json::array(), se = json::array(), noise = json::array();
  for (const auto& point : data.spectrum) {
    order.push_back(point.angular_order);
    power.push_back(number(point.power));
    se.push_back(number(point.se));
    noise.push_back(number(point.noise_power));
  }
  return {{"order", order}, {"power", power}, {"se", se}, {"noise", noise}, {"fold", facts.lead_fold}};
}

json evidence(const ReportData& data) {
  return {{"first", data.first_fold},           {"median", numbers(data.ln_bf_median)},
          {"lower", numbers(data.ln_bf_lower)}, {"upper", numbers(data.ln_bf_upper)},
          {"count", data.best_fold_count},      {"visibility", numbers(data.mean_visibility)},
          {"marks", {kEvenOdds, kFourInFive}}};
}

json centres(const ReportData& data) {
  const Centre middle = frame_middle(data.rows, data.columns);
  const std::size_t step = (data.centres.size() + kCentresDrawn - 1) / kCentresDrawn;
  json x = json::array(), y = json::array();
  double reach = std::isfinite(data.search) ? data.search : 0;
  for (std::size_t i = 0; i < data.centres.size(); i += step) {
    const auto& centre = data.centres[i];
    if (!std::isfinite(centre.x) || !std::isfinite(centre.y)) continue;
    x.push_back(rounded(centre.x));
    y.push_back(rounded(centre.y));
    reach = std::max({reach, std::abs(centre.x - middle.x), std::abs(centre.y - middle.y)});
  }
  return {{"x", x}, {"y", y}, {"middle", {middle.x, middle.y}}, {"search", number(data.search)}, {"reach", reach}};
}

}  // namespace

std::string chart_data(const ReportData& data, const Facts& facts) {
  json all = json::object();
  if (!data.spectrum.empty()) all["spectrum"] = spectrum(data, facts);
  if (!data.ln_bf_median.empty()) all["evidence"] = evidence(data);
  if (!data.centres.empty()) {
    all["centres"] = centres(data);
    const Histogram bins = histogram(centre_errors(data));
    if (!bins.counts.empty()) all["errors"] = {{"width", bins.width}, {"count", bins.counts}, {"above", bins.above}};
  }
  return script_safe(all.dump());
}

}  // namespace tambour::report
