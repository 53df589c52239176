// The top of the page: what came out, and what was asked.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

#include "report/html.hpp"
#include "report/sections.hpp"
#include "report/text.hpp"

namespace tambour::report {
namespace {

// Folds named one by one in the first table; the rest is summed up there and listed below it.
constexpr std::size_t kFoldsShown = 6;

// A number that comes from analysed images.
double measured(const ReportData& data, double value) {
  return data.analysed > 0 ? value : std::numeric_limits<double>::quiet_NaN();
}

std::string headline(const ReportData& data, const Facts& facts) {
  if (data.analysed == 0) return fmt::format("None of the {} could be analysed.", images_text(data.images));
  const std::size_t found = facts.symmetric + facts.supported;
  const auto all = static_cast<double>(data.images);
  std::string text = data.analysed == data.images
                         ? fmt::format("{} {} analysed. ", images_text(data.images), data.images == 1 ? "was" : "were")
                         : fmt::format("{} of {} {} analysed. ", count_text(data.analysed), images_text(data.images),
                                       data.analysed == 1 ? "was" : "were");
  if (facts.verdicts.empty()) return text;
  if (found == 0) return text + "None of them shows more rotational structure than noise would explain.";
  text += fmt::format("<strong>{} ({})</strong> {} more rotational structure than noise would explain",
                      count_text(found), share_text(static_cast<double>(found), all), found == 1 ? "shows" : "show");
  if (facts.lead_fold > 0)
    text += fmt::format("; the fold found most often is <strong>{}</strong>, in {} ({})", facts.lead_fold,
                        images_text(facts.lead_images), share_text(static_cast<double>(facts.lead_images), all));
  return text + ".";
}

std::string tile(std::string_view name, const std::string& value_html, const std::string& note_html) {
  return fmt::format("<div><dt>{}</dt><dd>{}<small>{}</small></dd></div>\n", name, value_html, note_html);
}

std::string tiles(const ReportData& data, const Facts& facts) {
  const auto all = static_cast<double>(data.images);
  const std::string of_all = " of all images";
  const std::size_t found = facts.symmetric + facts.supported;
  std::string html = "<dl class=\"tiles\">\n";
  html += tile("Analysed", count_text(data.analysed),
               fmt::format("of {}; {} skipped", images_text(data.images), count_text(facts.skipped)));
  html += facts.lead_fold > 0 ? tile("Most frequent fold", fmt::format("{}-fold", facts.lead_fold),
                                     fmt::format("{}, {}{}", images_text(facts.lead_images),
                                                 share_text(static_cast<double>(facts.lead_images), all), of_all))
                              : tile("Most frequent fold", "none",
                                     found == 0 && facts.inconclusive > 0 ? "no image shows more than noise" : "");
  html += tile("Inconclusive", count_text(facts.inconclusive),
               share_text(static_cast<double>(facts.inconclusive), all) + of_all);
  html += tile("Disk radius", number_text(data.radius) + " px",
               data.pixel_size.known() ? physical_text(data.radius, data.pixel_size) : "pixel size not known");
  html += tile("Signal to noise", number_text(measured(data, data.signal_to_noise), 3),
               "variances inside the disk, median over images");
  html += tile("Centre error", fixed_text(quantile(centre_errors(data), 0.5), 2) + " px",
               "standard error per axis, median over images");
  return html + "</dl>\n";
}

std::vector<std::string> verdict_row(const std::string& name, const std::string& verdict, std::size_t images,
                                     double all) {
  const double share = all > 0 ? 100 * static_cast<double>(images) / all : 0;
  const std::string bar = fmt::format("<span class=\"bar {}\" style=\"width:{:.2f}%\"></span>",
                                      verdict_rank(verdict) < 2 ? "found" : "other", std::clamp(share, 0.0, 100.0));
  return {name, bar, count_text(images), share_text(static_cast<double>(images), all)};
}

std::string verdict_table(const ReportData& data, const Facts& facts) {
  if (facts.verdicts.empty()) return nothing("No verdicts were counted.");
  const auto all = static_cast<double>(data.images);
  HtmlTable brief{"Verdicts", {"Verdict", "", "Images", "Share of all"}, "ttnn", {}};
  HtmlTable full{"Every verdict and fold", {"Verdict", "Images", "Share of all"}, "tnn", {}};
  std::size_t with_fold = 0, other_folds = 0, other_images = 0;
  for (std::size_t i = 0; i < facts.verdicts.size(); ++i) {
    const auto& count = facts.verdicts[i];
    const std::string name = verdict_text(count.verdict, count.fold);
    full.rows.push_back({name, count_text(count.images), share_text(static_cast<double>(count.images), all)});
    if (count.fold > 0 && ++with_fold > kFoldsShown) {
      ++other_folds;
      other_images += count.images;
    } else {
      brief.rows.push_back(verdict_row(name, count.verdict, count.images, all));
    }
    const bool last_fold = count.fold > 0 && (i + 1 == facts.verdicts.size() || facts.verdicts[i + 1].fold == 0);
    if (last_fold && other_folds > 0)
      brief.rows.push_back(
          verdict_row(fmt::format("{} other folds together", other_folds), count.verdict, other_images, all));
  }
  std::string html = "<div class=\"verdicts\">" + render(brief) + "</div>\n";
  if (other_folds > 0) html += collapsible("Every fold", render(full));
  return html;
}

std::string term(std::string_view name, const std::string& value_html) {
  return fmt::format("<div><dt>{}</dt><dd>{}</dd></div>\n", escaped(name), value_html);
}

}  // namespace

std::string masthead(const ReportData& data) {
  // The mark: nodal lines of a drum.
  std::string html =
      "<header>\n<p class=\"brand\"><svg viewBox=\"-12 -12 24 24\" aria-hidden=\"true\"><circle r=\"10.5\"/><circle "
      "r=\"5.4\"/><path d=\"M0-10.5V10.5M-9.1-5.25L9.1 5.25M-9.1 5.25L9.1-5.25\"/></svg>Tambour <span>rotational "
      "symmetry survey</span></p>\n";
  html += fmt::format("<h1>{}</h1>\n", escaped(data.title.empty() ? "Survey of round images" : data.title));
  html += fmt::format("<p class=\"meta\">{}{}version {}</p>\n", escaped(data.date), data.date.empty() ? "" : " · ",
                      escaped(data.provenance.version));
  return html + "</header>\n";
}

std::string summary_section(const ReportData& data, const Facts& facts) {
  std::string html =
      "<p class=\"lead\">" + headline(data, facts) + "</p>\n" + tiles(data, facts) + verdict_table(data, facts);
  html +=
      "<aside class=\"caution\"><p><strong>Before you use these numbers.</strong> <em>Best supported</em> means that "
      "an image holds more than noise and that this fold explains it best; a chance arrangement of parts is not "
      "excluded. <em>Inconclusive</em> does not mean that there is no symmetry. These results support a trained "
      "judgement and do not replace it: <a href=\"#limits\">what they can and cannot tell</a>.</p></aside>\n";
  return section("summary", "Summary", html);
}

std::string settings_section(const ReportData& data) {
  std::string html = "<dl class=\"terms\">\n";
  html +=
      term("Images", fmt::format("{}, {} × {} px (columns × rows)", count_text(data.images), data.columns, data.rows));
  html += term("Pixel size", physical_text(1, data.pixel_size));
  html += term("Disk radius", length_text(data.radius, data.pixel_size));
  html += term("Centres searched",
               data.search > 0 ? "within ± " + length_text(data.search, data.pixel_size) + " of the middle of the frame"
                               : "no: as given");
  html += term("Noise", "standard deviation " + number_text(measured(data, data.noise_sd)) +
                            " image units (median over images)");
  for (const auto& [name, value] : data.settings) html += term(name, escaped(value));
  html += "</dl>\n";
  if (!data.remarks.empty()) {
    html += "<h3>Remarks on the input</h3>\n<ul class=\"remarks\">\n";
    for (const auto& remark : data.remarks) html += "<li>" + escaped(remark) + "</li>\n";
    html += "</ul>\n";
  }
  html += paragraph(
      "Command, versions and the fingerprints of the inputs are listed under <a href=\"#provenance\">Provenance</a>.");
  return section("settings", "What was asked and done", html);
}

}  // namespace tambour::report
