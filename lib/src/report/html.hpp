// The few HTML parts that the sections share. Arguments called `html` are markup; everything else is escaped here.
#pragma once

#include <string>
#include <string_view>
#include <vector>

namespace tambour::report {

/// A table; cells are markup. The first cell of each row is its heading.
struct HtmlTable {
  std::string caption;  ///< plain text; read out, and shown above the table
  std::vector<std::string> header;
  std::string kinds;  ///< one letter a column: 'n' number, 't' text, 'c' code
  std::vector<std::vector<std::string>> rows;
};

std::string render(const HtmlTable& table);

/// A numbered section of the page, with an anchor.
std::string section(std::string_view id, std::string_view heading, const std::string& html);

/// A closed block with a summary line; `keep` blocks are opened for printing.
std::string collapsible(std::string_view summary, const std::string& html, bool open = false, bool keep = false);

/// A block that scrolls when it is long, reachable by keyboard.
std::string scrollable(std::string_view label, const std::string& html);

std::string paragraph(const std::string& html);

/// One sentence in place of something that there is nothing to show of.
std::string nothing(std::string_view sentence);

/// A canvas that the page's script draws the chart `id` on; `description` stands for it where it cannot be seen.
std::string chart(std::string_view id, std::string_view description);

/// A captioned figure.
std::string figure(const std::string& html, const std::string& caption_html);

}  // namespace tambour::report
