// Tables as CSV: comment lines, a header line, rows.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "tambour/files.hpp"

namespace tambour::tools {

/// Ten significant digits; a number that is not finite gives an empty cell.
std::string cell(double number);
/// Empty when there is no number.
std::string cell(const std::optional<double>& number);
/// As it is, or within double quotes where a comma, a quote, a line break, a space at an end or a leading # would
/// mislead a reader.
std::string text_cell(const std::string& text);

/// One row of a table, with its line break.
std::string csv_line(const std::vector<std::string>& cells);

/// Writes a table beside its place; commit() renames it. Throws Error(cannot_write).
class CsvWriter {
 public:
  CsvWriter(const std::string& path, bool overwrite) : file_(path, overwrite) {}

  /// One line above the header, `# text`; line breaks in the text become spaces.
  void comment(const std::string& text);
  /// A row of cells made by cell() and text_cell(); the header is the first.
  void row(const std::vector<std::string>& cells) { rows(csv_line(cells)); }
  /// Rows made by csv_line(), so that they can be made in other threads.
  void rows(const std::string& lines);
  void commit();

 private:
  void flush();

  OutputFile file_;
  std::string pending_;
};

}  // namespace tambour::tools
