// One run of a tool: its threads, its progress, and what it tells the user.
#pragma once

#include <cstddef>
#include <nlohmann/json.hpp>
#include <ostream>
#include <string>
#include <vector>

#include "common/command_line.hpp"
#include "common/csv_writer.hpp"
#include "common/interrupt.hpp"
#include "common/progress_bar.hpp"
#include "common/same_file.hpp"
#include "tambour/image_source.hpp"
#include "tambour/provenance.hpp"

namespace tambour::tools {

/// Collects remarks, results, skipped images and written files; finish() prints them and gives the exit code.
///
/// Standard output carries the summary, or with --json one document and nothing else; remarks go to standard error.
class Session {
 public:
  Session(const CommandLine& line, std::ostream& out, std::ostream& err);

  Executor& executor() noexcept { return executor_; }
  ProgressBar& progress() noexcept { return progress_; }

  /// What a person should know: on standard error at once (unless --quiet) and in the JSON document.
  void remark(const std::string& sentence);
  const std::vector<std::string>& remarks() const noexcept { return remarks_; }
  /// Throws Error(bad_input) when --out is one of the input files.
  void refuse_as_output(const std::vector<std::string>& input_files) const {
    refuse_inputs_as_outputs(input_files, {line_.out()});
  }
  /// A line of the summary on standard output.
  void say(const std::string& line) { summary_.push_back(line); }
  /// An entry of `results` in the JSON document.
  void result(const std::string& name, nlohmann::ordered_json value) { results_[name] = std::move(value); }
  /// An output file that is in its place.
  void wrote(const std::string& role, const std::string& path);
  void skip(std::size_t image, const std::string& source, const std::string& reason);
  std::size_t skipped() const noexcept { return skipped_.size(); }

  /// Command, versions and options, with the SHA-256 of each file. Stops when interrupted.
  Provenance provenance(const std::vector<std::string>& input_files) const;
  /// Tool, version, command and options as comment lines of a table.
  void describe_in(CsvWriter& table) const;

  /// Prints; exit_done, or exit_skipped when more images were skipped than `max_skipped`.
  int finish(std::size_t max_skipped);

 private:
  struct Skipped {
    std::size_t image;
    std::string source;
    std::string reason;
  };

  void print_json();
  void name_skipped();

  const CommandLine& line_;
  std::ostream& out_;
  std::ostream& err_;
  InterruptibleExecutor executor_;
  ProgressBar progress_;
  std::vector<std::string> remarks_;
  std::vector<std::string> summary_;
  nlohmann::ordered_json results_ = nlohmann::ordered_json::object();
  nlohmann::ordered_json files_ = nlohmann::ordered_json::object();
  std::vector<Skipped> skipped_;
};

/// --max-skipped.
class SkipFlags {
 public:
  void add_to(CommandLine& line);
  std::size_t max_skipped() const noexcept { return static_cast<std::size_t>(max_skipped_); }

 private:
  std::int64_t max_skipped_ = 0;
};

}  // namespace tambour::tools
