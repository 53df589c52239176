// Which files the inputs name.
#include <filesystem>
#include <fstream>
#include <string_view>

#include "files/image_file.hpp"
#include "files/refuse.hpp"

namespace tambour {
namespace {

namespace fs = std::filesystem;

std::string_view trimmed(std::string_view text) {
  constexpr std::string_view blanks = " \t\r";
  const auto first = text.find_first_not_of(blanks);
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(blanks) - first + 1);
}

void read_list(const std::string& path, std::vector<std::string>& names) {
  std::error_code ignored;
  if (fs::is_directory(path, ignored)) refuse_input("{}: is a folder, not a list of inputs", path);
  std::ifstream file(path);
  if (!file) refuse_input("{}: there is no such list of inputs, or it cannot be read", path);
  const fs::path folder = fs::path(path).parent_path();
  const std::size_t before = names.size();
  std::string line;
  for (std::size_t number = 1; std::getline(file, line); ++number) {
    if (number == 1 && line.starts_with("\xEF\xBB\xBF")) line.erase(0, 3);  // a byte-order mark
    const std::string_view name = trimmed(line);
    if (name.empty() || name[0] == '#') continue;
    if (name[0] == '@')
      refuse_input("{}: line {} names another list, {}; a list names images only", path, number, name);
    if (name.find('\0') != std::string_view::npos) refuse_input("{}: line {} is not text", path, number);
    names.push_back((folder / name).string());
  }
  if (names.size() == before) refuse_input("{}: the list names no input", path);
}

}  // namespace

InputPath split_input(const std::string& input) {
  const auto colons = input.find("::");
  std::error_code ignored;
  if (colons == std::string::npos || fs::exists(input, ignored)) return {input, ""};
  return {input.substr(0, colons), input.substr(colons + 2)};
}

std::vector<std::string> expand_lists(const std::vector<std::string>& inputs) {
  std::vector<std::string> names;
  for (const auto& input : inputs) {
    if (input.empty()) refuse_input("the name of an input is empty");
    if (input[0] == '@')
      read_list(input.substr(1), names);
    else
      names.push_back(input);
  }
  return names;
}

}  // namespace tambour
