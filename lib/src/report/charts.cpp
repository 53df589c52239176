// The sections with charts. Every chart has its numbers in a table beneath it.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "report/chart_data.hpp"
#include "report/html.hpp"
#include "report/sections.hpp"
#include "report/text.hpp"

namespace tambour::report {
namespace {

std::string key(std::string_view mark, std::string_view words) {
  return fmt::format("<li><i class=\"key {}\"></i>{}</li>", mark, words);
}

std::string evidence_table(const ReportData& data) {
  HtmlTable table{"Evidence over the fold N", {"N", "ln BF, median"}, "nn", {}};
  table.header.push_back(fmt::format("ln BF, {} quantile", number_text(data.lower_quantile)));
  table.header.push_back(fmt::format("ln BF, {} quantile", number_text(data.upper_quantile)));
  table.header.insert(table.header.end(), {"Images preferring N", "Visibility, mean"});
  table.kinds = "nnnnnn";
  for (std::size_t i = 0; i < data.ln_bf_median.size(); ++i)
    table.rows.push_back({std::to_string(data.first_fold + static_cast<int>(i)), fixed_text(data.ln_bf_median[i], 2),
                          fixed_text(data.ln_bf_lower[i], 2), fixed_text(data.ln_bf_upper[i], 2),
                          data.best_fold_count.empty() ? "" : count_text(data.best_fold_count[i]),
                          data.mean_visibility.empty() ? "" : fixed_text(data.mean_visibility[i], 1)});
  return scrollable("Evidence over the fold", render(table));
}

std::string spectrum_table(const ReportData& data) {
  HtmlTable table{"Rotational spectrum, mean over images",
                  {"Order n", "Power", "Standard error", "Noise, already subtracted"},
                  "nnnn",
                  {}};
  for (const auto& point : data.spectrum)
    table.rows.push_back({std::to_string(point.angular_order), number_text(point.power), number_text(point.se, 3),
                          number_text(point.noise_power)});
  return scrollable("Rotational spectrum", render(table));
}

std::string centres_table(const ReportData& data) {
  const Centre middle = frame_middle(data.rows, data.columns);
  std::vector<double> x, y, away, se_x, se_y;
  for (const auto& centre : data.centres) {
    x.push_back(centre.x);
    y.push_back(centre.y);
    away.push_back(std::hypot(centre.x - middle.x, centre.y - middle.y));
    se_x.push_back(centre.se_x);
    se_y.push_back(centre.se_y);
  }
  HtmlTable table{"Quantiles over the images, px", {"Quantity", "5 %", "25 %", "median", "75 %", "95 %"}, "tnnnnn", {}};
  const auto add = [&](const std::string& name, const std::vector<double>& values) {
    std::vector<std::string> row{name};
    for (const double share : {0.05, 0.25, 0.5, 0.75, 0.95}) row.push_back(fixed_text(quantile(values, share), 2));
    table.rows.push_back(row);
  };
  add("x", x);
  add("y", y);
  add("distance from the middle of the frame", away);
  add("standard error in x", se_x);
  add("standard error in y", se_y);
  return render(table);
}

std::string errors_table(const Histogram& bins) {
  HtmlTable table{"Standard error of the centre per axis", {"From, px", "to below, px", "Images"}, "nnn", {}};
  for (std::size_t i = 0; i < bins.counts.size(); ++i) {
    const bool open = i + 1 == bins.counts.size() && bins.above > 0;
    table.rows.push_back({number_text(bins.width * static_cast<double>(i)),
                          open ? "and above" : number_text(bins.width * static_cast<double>(i + 1)),
                          count_text(bins.counts[i])});
  }
  return scrollable("Standard errors of the centres", render(table));
}

}  // namespace

std::string evidence_section(const ReportData& data) {
  constexpr std::string_view heading = "Evidence for each fold";
  if (data.ln_bf_median.empty()) return section("evidence", heading, nothing("No fold was tested."));
  const int last = data.first_fold + static_cast<int>(data.ln_bf_median.size()) - 1;
  const auto best = std::max_element(data.ln_bf_median.begin(), data.ln_bf_median.end(), [](double a, double b) {
    return !std::isfinite(a) ? std::isfinite(b) : std::isfinite(b) && a < b;
  });
  std::string html =
      "<ul class=\"keys\">" + key("line", "median over images") +
      key("band", fmt::format("{} to {} quantile", number_text(data.lower_quantile), number_text(data.upper_quantile)));
  if (!data.best_fold_count.empty()) html += key("column", "images that prefer N");
  if (!data.mean_visibility.empty()) html += key("dot", "mean visibility");
  html += "</ul>\n";
  html += chart("evidence",
                fmt::format("ln Bayes factor of folds {} to {}: the median is largest at N = {}, {}.", data.first_fold,
                            last, data.first_fold + (best - data.ln_bf_median.begin()), fixed_text(*best, 1)));
  if (!data.best_fold_count.empty())
    html += chart("preferred", "How many images prefer each fold; numbers in the table below.");
  if (!data.mean_visibility.empty())
    html += chart("visibility", "Mean visibility of each fold; numbers in the table below.");
  std::string caption =
      "Natural logarithm of the Bayes factor of N-fold symmetry against none, over all analysed images; above 0 speaks "
      "for N.";
  if (!data.best_fold_count.empty())
    caption += " Columns: how many images have their largest Bayes factor at N, whatever their verdict.";
  if (!data.mean_visibility.empty())
    caption += " Dots: mean visibility ν, the energy above noise in the harmonics of N.";
  html = figure(html, caption);
  html += paragraph(
      fmt::format("<strong>What can be seen at all.</strong> In simulations the test finds a symmetry of visibility "
                  "<b>ν ≈ {:.0f}</b> in half of the images and one of <b>ν ≈ {:.0f}</b> in four of five. An image "
                  "below these marks may well be symmetric and still come out inconclusive; a better signal or more "
                  "pixels across the object help. A divisor of the true N collects the same harmonics and more noise "
                  "with them, so it follows N at a distance; a multiple of N misses some of them.",
                  kEvenOdds, kFourInFive));
  return section("evidence", heading, html + collapsible("Table: evidence over the fold", evidence_table(data)));
}

std::string spectrum_section(const ReportData& data, const Facts& facts) {
  constexpr std::string_view heading = "Rotational spectrum";
  if (data.spectrum.empty()) return section("spectrum", heading, nothing("No spectrum was computed."));
  const std::size_t hidden = static_cast<std::size_t>(std::count_if(
      data.spectrum.begin(), data.spectrum.end(), [](const ReportOrder& point) { return !(point.power > 0); }));
  std::string html = "<ul class=\"keys\">";
  if (facts.lead_fold > 0) html += key("dot", fmt::format("multiples of {}", facts.lead_fold));
  html += key("dot plain", facts.lead_fold > 0 ? "other orders" : "orders") +
          key("hollow", "zero, below, or off the scale") + key("floor", "noise floor, already subtracted") + "</ul>\n";
  html += chart("spectrum", fmt::format("Power of angular orders {} to {} on a logarithmic scale, with error bars and "
                                        "noise floor; {} not above zero. Numbers in the table below.",
                                        data.spectrum.front().angular_order, data.spectrum.back().angular_order,
                                        hidden == 1 ? "one order is" : fmt::format("{} orders are", hidden)));
  html =
      figure(html,
             "Power per angular order n, both signs together, mean over the analysed images, noise subtracted; bars: "
             "two standard errors either way. A logarithmic scale has no place for zero: orders that are not above "
             "zero, or too weak for the scale, stand as open triangles at the lower edge, and their bars end where two "
             "standard errors end. Dashed: what the noise alone gives in one image; it has been subtracted.");
  html += paragraph(
      "A spectrum shows where power lies. It <strong>cannot prove that a symmetry is absent</strong>: power spread "
      "over all orders is what an off-centre, bent or partly hidden symmetric object gives as well.");
  return section("spectrum", heading, html + collapsible("Table: rotational spectrum", spectrum_table(data)));
}

std::string centres_section(const ReportData& data) {
  constexpr std::string_view heading = "Rotation centres";
  if (data.centres.empty()) return section("centres", heading, nothing("No centres were determined."));
  const Histogram bins = histogram(centre_errors(data));
  const std::size_t step = (data.centres.size() + kCentresDrawn - 1) / kCentresDrawn;
  const std::string drawn = step > 1 ? fmt::format(" One centre in {} is drawn.", step) : "";
  std::string html = "<div class=\"pair\">\n" +
                     chart("centres", "Scatter of the rotation centres in pixels; quantiles in the table below.");
  if (!bins.counts.empty())
    html += chart("errors", "Histogram of the standard errors of the centres; numbers in the table below.");
  html += "</div>\n";
  const std::string square = data.search > 0 ? fmt::format(
                                                   " Dashed: the searched square, ± {} about the middle of the frame "
                                                   "(cross); centres heaped at its sides ask for a wider search.",
                                                   length_text(data.search, data.pixel_size))
                                             : " Cross: the middle of the frame.";
  html = figure(
      html,
      "Left: the centre of every analysed image, x to the right and y downwards as in the images." + square + drawn +
          " Right: standard error of the centres per axis, root mean square of x and y" +
          (bins.above > 0 ? fmt::format("; the last column also holds {} beyond it.", images_text(bins.above)) : "."));
  html += "<div class=\"wide\">" + centres_table(data) + "</div>\n";
  if (!bins.counts.empty()) html += collapsible("Table: standard errors of the centres", errors_table(bins));
  return section("centres", heading, html);
}

}  // namespace tambour::report
