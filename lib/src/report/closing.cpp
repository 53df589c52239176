// The end of the page: skipped images, what the results can and cannot tell, where they come from.
#include <fmt/format.h>

#include "report/assets.hpp"
#include "report/html.hpp"
#include "report/sections.hpp"
#include "report/text.hpp"

namespace tambour::report {
namespace {

// Longer lists start closed.
constexpr std::size_t kOpenRows = 12;

using Pairs = std::vector<std::pair<std::string, std::string>>;

std::string pair_table(const std::string& caption, const std::string& first, const std::string& second,
                       const Pairs& pairs, const std::string& kinds) {
  HtmlTable table{caption, {first, second}, kinds, {}};
  for (const auto& [name, value] : pairs) table.rows.push_back({escaped(name), escaped(value)});
  return render(table);
}

std::string pair_block(const std::string& summary, const std::string& first, const std::string& second,
                       const Pairs& pairs, const std::string& kinds, bool open) {
  if (pairs.empty()) return "";
  return collapsible(fmt::format("{} ({})", summary, pairs.size()),
                     scrollable(summary, pair_table("", first, second, pairs, kinds)), open, true);
}

}  // namespace

std::string skipped_section(const ReportData& data) {
  constexpr std::string_view heading = "Skipped images";
  if (data.skipped.empty())
    return section("skipped", heading,
                   nothing(data.images > data.analysed ? fmt::format("{} not analysed; no reasons were passed on.",
                                                                     images_text(data.images - data.analysed))
                                                       : "No image was skipped."));
  HtmlTable table{"", {"Image", "Source", "Reason"}, "nct", {}};
  for (const auto& skipped : data.skipped)
    table.rows.push_back({std::to_string(skipped.image), escaped(skipped.source), escaped(skipped.reason)});
  std::string html = paragraph(fmt::format("{} of {} {} left out of everything above.", count_text(data.skipped.size()),
                                           images_text(data.images), data.skipped.size() == 1 ? "was" : "were"));
  html += collapsible(fmt::format("{} with reasons", images_text(data.skipped.size())),
                      scrollable("Skipped images and reasons", render(table)), data.skipped.size() <= kOpenRows, true);
  return section("skipped", heading, html);
}

std::string limits_section() {
  return section("limits", "What these results can and cannot tell", std::string(limits_text));
}

std::string provenance_section(const ReportData& data) {
  const Provenance& made = data.provenance;
  std::string html = "<dl class=\"terms\">\n";
  html += fmt::format("<div><dt>Program</dt><dd>Tambour {}</dd></div>\n", escaped(made.version));
  if (!made.command.empty())
    html += fmt::format("<div class=\"long\"><dt>Command</dt><dd><code>{}</code></dd></div>\n", escaped(made.command));
  html += "</dl>\n";
  html += made.inputs.empty() ? nothing("No input files were recorded.") : "";
  html += pair_block("Inputs and their SHA-256", "File", "SHA-256", made.inputs, "cc", made.inputs.size() <= kOpenRows);
  html += pair_block("Options, defaults included", "Option", "Value", made.options, "cc", false);
  html += pair_block("Libraries underneath", "Library", "Version", made.libraries, "tt", false);
  return section("provenance", "Provenance", html);
}

}  // namespace tambour::report
