// Where a result comes from.
#pragma once

#include <string>
#include <utility>
#include <vector>

namespace tambour {

/// Written into every output file.
struct Provenance {
  std::string command;                                         ///< the command line, quoted for a shell
  std::string version;                                         ///< of this library
  std::vector<std::pair<std::string, std::string>> libraries;  ///< name, version
  std::vector<std::pair<std::string, std::string>> options;    ///< name, value, defaults included
  std::vector<std::pair<std::string, std::string>> inputs;     ///< file, SHA-256 in hexadecimal
};

/// Names and versions of the libraries behind the files. Those behind the numbers: see version.hpp.
std::vector<std::pair<std::string, std::string>> library_versions();

/// SHA-256 of a file, read in pieces. Throws Error(bad_input) when it cannot be read.
std::string sha256_of_file(const std::string& path);

}  // namespace tambour
