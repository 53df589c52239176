#include "common/csv_writer.hpp"

#include <fmt/format.h>

#include <cmath>

namespace tambour::tools {

std::string cell(double number) { return std::isfinite(number) ? fmt::format("{:.10g}", number) : std::string(); }

std::string cell(const std::optional<double>& number) { return number ? cell(*number) : std::string(); }

std::string text_cell(const std::string& text) {
  const bool quote = text.find_first_of(",\"\r\n") != std::string::npos ||
                     (!text.empty() && (text.front() == ' ' || text.front() == '#' || text.back() == ' '));
  if (!quote) return text;
  std::string quoted = "\"";
  for (const char c : text) {
    if (c == '"') quoted += '"';
    quoted += c == '\n' || c == '\r' ? ' ' : c;
  }
  return quoted + '"';
}

std::string csv_line(const std::vector<std::string>& cells) {
  std::string line;
  for (std::size_t i = 0; i < cells.size(); ++i) {
    if (i > 0) line += ',';
    line += cells[i];
  }
  return line + '\n';
}

void CsvWriter::comment(const std::string& text) {
  pending_ += "# ";
  for (const char c : text) pending_ += c == '\n' || c == '\r' ? ' ' : c;
  pending_ += '\n';
}

void CsvWriter::rows(const std::string& lines) {
  pending_ += lines;
  if (pending_.size() > 1 << 16) flush();
}

void CsvWriter::commit() {
  flush();
  file_.commit();
}

void CsvWriter::flush() {
  file_.write(pending_);
  pending_.clear();
}

}  // namespace tambour::tools
