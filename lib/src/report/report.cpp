#include "tambour/report.hpp"

#include <fmt/format.h>

#include "base/check.hpp"
#include "report/assets.hpp"
#include "report/chart_data.hpp"
#include "report/picture.hpp"
#include "report/sections.hpp"
#include "report/text.hpp"

namespace tambour {
namespace {

void check(const ReportData& data) {
  const std::size_t folds = data.ln_bf_median.size();
  require(data.ln_bf_lower.size() == folds, "length of ln_bf_lower", data.ln_bf_lower.size(),
          fmt::format("{}, as ln_bf_median", folds));
  require(data.ln_bf_upper.size() == folds, "length of ln_bf_upper", data.ln_bf_upper.size(),
          fmt::format("{}, as ln_bf_median", folds));
  const auto none_or_all = [&](std::size_t length, const char* name) {
    require(length == 0 || length == folds, name, length, fmt::format("0 or {}, as ln_bf_median", folds));
  };
  none_or_all(data.best_fold_count.size(), "length of best_fold_count");
  none_or_all(data.mean_visibility.size(), "length of mean_visibility");
  require(data.analysed <= data.images, "number of analysed images", data.analysed,
          fmt::format("0 to {}", data.images));
  for (const auto& image : data.montage)
    report::check_picture(image.picture, fmt::format("image {} of the montage", image.image));
  for (const auto& rebuild : data.rebuilds)
    for (const auto* picture : {&rebuild.original, &rebuild.rebuilt, &rebuild.residual})
      report::check_picture(*picture, fmt::format("rebuilt image {}", rebuild.image));
  for (const auto& group : data.groups) {
    report::check_picture(group.mean, fmt::format("the mean of group {} {}", group.verdict, group.fold));
    for (const auto& image : group.examples)
      report::check_picture(image.picture, fmt::format("aligned image {}", image.image));
  }
}

std::string head(const ReportData& data) {
  std::string html = "<!doctype html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n";
  // Nothing may be loaded from anywhere, even if a name in the data were crafted to ask for it.
  html +=
      "<meta http-equiv=\"Content-Security-Policy\" content=\"default-src 'none'; img-src data:; style-src "
      "'unsafe-inline'; script-src 'unsafe-inline'; base-uri 'none'; form-action 'none'\">\n"
      "<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n<meta name=\"color-scheme\" "
      "content=\"light\">\n"
      "<meta name=\"referrer\" content=\"no-referrer\">\n";
  html += fmt::format("<meta name=\"generator\" content=\"Tambour {}\">\n<title>{}</title>\n",
                      report::escaped(data.provenance.version),
                      report::escaped(data.title.empty() ? "Survey of round images" : data.title));
  html += fmt::format(
      "<!--\nThe charts of this page are drawn by Chart.js {}, which is contained in it under this licence:\n\n{}-->\n",
      report::chart_version, report::chart_licence);
  html += "<style>\n";
  html += report::page_style;
  return html + "</style>\n<noscript><style>.plot, .keys { display: none; }</style></noscript>\n</head>\n";
}

constexpr std::string_view kContents =
    "<nav aria-label=\"Contents\"><a href=\"#summary\">Summary</a><a href=\"#settings\">Asked and done</a><a "
    "href=\"#images\">Images</a><a href=\"#evidence\">Evidence</a><a href=\"#spectrum\">Spectrum</a><a "
    "href=\"#centres\">Centres</a><a href=\"#rebuilt\">Rebuilt</a><a href=\"#groups\">Groups</a><a "
    "href=\"#skipped\">Skipped</a><a href=\"#limits\">Limits</a><a href=\"#provenance\">Provenance</a></nav>\n";

}  // namespace

std::string render_report(const ReportData& data) {
  check(data);
  const report::Facts facts = report::gather(data);
  std::string html = head(data);
  html += "<body>\n" + report::masthead(data);
  html += kContents;
  html += "<main>\n";
  html +=
      "<noscript><p class=\"nothing\">Scripts are switched off: the charts are not drawn. The tables hold all their "
      "numbers.</p></noscript>\n";
  html += report::summary_section(data, facts) + report::settings_section(data) + report::montage_section(data);
  html += report::evidence_section(data) + report::spectrum_section(data, facts) + report::centres_section(data);
  html += report::rebuilds_section(data) + report::groups_section(data) + report::skipped_section(data);
  html += report::limits_section() + report::provenance_section(data);
  html +=
      "</main>\n<script type=\"application/json\" id=\"chart-data\">" + report::chart_data(data, facts) + "</script>\n";
  for (const std::string_view script : {report::chart_script, report::page_script})
    html.append("<script>\n").append(script).append("</script>\n");
  return html + "</body>\n</html>\n";
}

}  // namespace tambour
