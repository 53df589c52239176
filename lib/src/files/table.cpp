// CSV tables. Cells may be quoted as in RFC 4180 save that they do not reach over lines.
#include <algorithm>
#include <fstream>
#include <string_view>

#include "base/check.hpp"
#include "files/refuse.hpp"
#include "files/units.hpp"
#include "tambour/files.hpp"

namespace tambour {
namespace {

std::string_view trimmed(std::string_view text) {
  constexpr std::string_view blanks = " \t\r";
  const auto first = text.find_first_not_of(blanks);
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(blanks) - first + 1);
}

// Takes one cell and the comma behind it off the line.
std::string take_cell(const std::string& path, std::size_t number, std::string_view& line) {
  line.remove_prefix(std::min(line.find_first_not_of(" \t"), line.size()));
  std::string cell;
  if (line.empty() || line[0] != '"') {
    const auto comma = std::min(line.find(','), line.size());
    cell = trimmed(line.substr(0, comma));
    line.remove_prefix(comma);
    return cell;
  }
  std::size_t place = 1;
  while (true) {
    const auto quote = line.find('"', place);
    if (quote == std::string_view::npos) refuse_input("{}: line {}: a quoted cell does not end", path, number);
    cell += line.substr(place, quote - place);
    place = quote + 1;
    if (place >= line.size() || line[place] != '"') break;
    cell += '"';  // two quotes stand for one
    ++place;
  }
  line.remove_prefix(std::min(line.find_first_not_of(" \t", place), line.size()));
  if (!line.empty() && line[0] != ',') refuse_input("{}: line {}: text follows a quoted cell", path, number);
  return cell;
}

std::vector<std::string> split(const std::string& path, std::size_t number, std::string_view line) {
  std::vector<std::string> cells;
  while (true) {
    cells.push_back(take_cell(path, number, line));
    if (line.empty()) return cells;
    line.remove_prefix(1);
  }
}

}  // namespace

std::size_t Table::column(const std::string& name) const {
  const auto found = std::find(columns.begin(), columns.end(), name);
  if (found != columns.end()) return static_cast<std::size_t>(found - columns.begin());
  refuse_input("{}: has no column \"{}\"; there are {}", path, name, fmt::join(columns, ", "));
}

double Table::number(std::size_t row, std::size_t column) const {
  require(row < rows.size(), "the row of a table", row, fmt::format("less than {}", rows.size()));
  require(column < columns.size(), "the column of a table", column, fmt::format("less than {}", columns.size()));
  const std::string& text = rows[row][column];
  if (const auto value = whole_number(text)) return *value;
  refuse_input("{}: line {}: \"{}\" in column {} is not a number", path, lines[row], text, columns[column]);
}

Table read_table(const std::string& path) {
  std::ifstream file(path);
  if (!file) refuse_input("{}: there is no such file, or it cannot be read", path);
  Table table;
  table.path = path;
  std::string line;
  for (std::size_t number = 1; std::getline(file, line); ++number) {
    if (number == 1 && line.starts_with("\xEF\xBB\xBF")) line.erase(0, 3);  // a byte-order mark
    const std::string_view text = trimmed(line);
    if (text.empty() || text[0] == '#') continue;
    auto cells = split(path, number, text);
    if (table.columns.empty()) {
      table.columns = std::move(cells);
      continue;
    }
    if (cells.size() != table.columns.size())
      refuse_input("{}: line {} has {} cells; the header has {}", path, number, cells.size(), table.columns.size());
    table.rows.push_back(std::move(cells));
    table.lines.push_back(number);
  }
  if (file.bad()) refuse_input("{}: cannot be read to its end", path);
  if (table.columns.empty()) refuse_input("{}: has no header line", path);
  return table;
}

}  // namespace tambour
