#include "report/html.hpp"

#include <fmt/format.h>

#include "report/text.hpp"

namespace tambour::report {

std::string render(const HtmlTable& table) {
  const auto kind = [&](std::size_t column) { return column < table.kinds.size() ? table.kinds[column] : 't'; };
  std::string html = "<table>";
  if (!table.caption.empty()) html += "<caption>" + escaped(table.caption) + "</caption>";
  html += "<thead><tr>";
  for (std::size_t c = 0; c < table.header.size(); ++c)
    html += fmt::format("<th scope=\"col\" class=\"{}\">{}</th>", kind(c), escaped(table.header[c]));
  html += "</tr></thead>\n<tbody>\n";
  for (const auto& row : table.rows) {
    html += "<tr>";
    for (std::size_t c = 0; c < row.size(); ++c)
      html += c == 0 ? fmt::format("<th scope=\"row\" class=\"{}\">{}</th>", kind(c), row[c])
                     : fmt::format("<td class=\"{}\">{}</td>", kind(c), row[c]);
    html += "</tr>\n";
  }
  return html + "</tbody></table>\n";
}

std::string section(std::string_view id, std::string_view heading, const std::string& html) {
  return fmt::format(
             "<section id=\"{0}\" aria-labelledby=\"{0}-heading\">\n<h2 id=\"{0}-heading\">{1}</h2>\n<div "
             "class=\"body\">\n",
             id, escaped(heading)) +
         html + "</div>\n</section>\n";
}

std::string collapsible(std::string_view summary, const std::string& html, bool open, bool keep) {
  return fmt::format("<details{}{}><summary>{}</summary>\n", open ? " open" : "", keep ? " data-print" : "",
                     escaped(summary)) +
         html + "</details>\n";
}

std::string scrollable(std::string_view label, const std::string& html) {
  return fmt::format("<div class=\"scroll\" tabindex=\"0\" role=\"region\" aria-label=\"{}\">\n", escaped(label)) +
         html + "</div>\n";
}

std::string paragraph(const std::string& html) { return "<p>" + html + "</p>\n"; }

std::string nothing(std::string_view sentence) { return "<p class=\"nothing\">" + escaped(sentence) + "</p>\n"; }

std::string chart(std::string_view id, std::string_view description) {
  return fmt::format(
      "<div class=\"plot\" id=\"plot-{0}\"><canvas id=\"chart-{0}\" role=\"img\" aria-label=\"{1}\"></canvas></div>\n",
      id, escaped(description));
}

std::string figure(const std::string& html, const std::string& caption_html) {
  return "<figure>\n" + html + "<figcaption>" + caption_html + "</figcaption>\n</figure>\n";
}

}  // namespace tambour::report
