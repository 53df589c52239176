// Reads the small CSV files of reference values: comment lines begin with '#', then one line of column names.
#pragma once

#include <cstddef>
#include <cstdlib>
#include <fstream>
#include <sstream>
#include <stdexcept>
#include <string>
#include <vector>

namespace tambour::testing {

class Csv {
 public:
  explicit Csv(const std::string& path) {
    std::ifstream file(path);
    if (!file) throw std::runtime_error("cannot open the reference file " + path);
    std::string line;
    while (std::getline(file, line)) {
      if (line.empty() || line[0] == '#') continue;
      std::vector<std::string> cells = split(line);
      if (columns_.empty()) {
        columns_ = std::move(cells);
      } else {
        if (cells.size() != columns_.size()) throw std::runtime_error(path + " has a line of another length: " + line);
        rows_.push_back(std::move(cells));
      }
    }
    if (rows_.empty()) throw std::runtime_error("no rows in the reference file " + path);
  }

  std::size_t rows() const { return rows_.size(); }

  const std::string& text(std::size_t row, const std::string& column) const {
    for (std::size_t i = 0; i < columns_.size(); ++i) {
      if (columns_[i] == column) return rows_[row][i];
    }
    throw std::runtime_error("no column " + column);
  }
  double number(std::size_t row, const std::string& column) const {
    return std::strtod(text(row, column).c_str(), nullptr);
  }
  long double wide(std::size_t row, const std::string& column) const {
    return std::strtold(text(row, column).c_str(), nullptr);
  }
  int integer(std::size_t row, const std::string& column) const { return std::atoi(text(row, column).c_str()); }

 private:
  static std::vector<std::string> split(const std::string& line) {
    std::vector<std::string> cells;
    std::stringstream stream(line);
    std::string cell;
    while (std::getline(stream, cell, ',')) cells.push_back(cell);
    if (line.back() == ',') cells.emplace_back();
    return cells;
  }

  std::vector<std::string> columns_;
  std::vector<std::vector<std::string>> rows_;
};

}  // namespace tambour::testing
