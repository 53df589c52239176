#include "common/session.hpp"

#include <fmt/format.h>

#include <limits>

#include "common/all_versions.hpp"
#include "common/exit_codes.hpp"
#include "tambour/version.hpp"

namespace tambour::tools {
namespace {

constexpr int json_schema_version = 1;
/// Standard error names this many skipped images; the JSON document and the table name them all.
constexpr std::size_t named_at_most = 100;

}  // namespace

Session::Session(const CommandLine& line, std::ostream& out, std::ostream& err)
    : line_(line),
      out_(out),
      err_(err),
      executor_(line.threads()),
      progress_(line.quiet() ? nullptr : terminal_or_null(err)) {}

void Session::remark(const std::string& sentence) {
  remarks_.push_back(sentence);
  if (line_.quiet()) return;
  progress_.clear();
  err_ << line_.tool() << ": " << sentence << '\n';
}

void Session::wrote(const std::string& role, const std::string& path) { files_[role] = path; }

void Session::skip(std::size_t image, const std::string& source, const std::string& reason) {
  skipped_.push_back({image, source, reason});
}

Provenance Session::provenance(const std::vector<std::string>& input_files) const {
  Provenance provenance{line_.command(), version(), all_library_versions(), line_.options(), {}};
  for (const auto& file : input_files) {
    stop_if_interrupted();
    provenance.inputs.emplace_back(file, sha256_of_file(file));
  }
  return provenance;
}

void Session::describe_in(CsvWriter& table) const {
  table.comment(fmt::format("{} {}", line_.tool(), version()));
  table.comment("command: " + line_.command());
  for (const auto& [name, value] : line_.options())
    if (!value.empty()) table.comment(fmt::format("{}: {}", name, value));
}

int Session::finish(std::size_t max_skipped) {
  progress_.clear();
  const bool too_many = skipped_.size() > max_skipped;
  if (too_many) name_skipped();
  if (line_.json())
    print_json();
  else if (!line_.quiet())
    for (const auto& line : summary_) out_ << line << '\n';
  return too_many ? exit_skipped : exit_done;
}

void Session::name_skipped() {
  for (std::size_t i = 0; i < skipped_.size() && i < named_at_most; ++i)
    err_ << fmt::format("{}: image {} ({}) skipped: {}\n", line_.tool(), skipped_[i].image, skipped_[i].source,
                        skipped_[i].reason);
  if (skipped_.size() > named_at_most)
    err_ << fmt::format("{}: and {} more\n", line_.tool(), skipped_.size() - named_at_most);
  err_ << fmt::format("{}: {} skipped, more than --max-skipped allows\n", line_.tool(), skipped_.size());
}

void Session::print_json() {
  nlohmann::ordered_json document;
  document["schema_version"] = json_schema_version;
  document["tool"] = line_.tool();
  document["version"] = version();
  document["command"] = line_.command();
  document["results"] = results_;
  auto skipped = nlohmann::ordered_json::array();
  for (const auto& entry : skipped_)
    skipped.push_back({{"image", entry.image}, {"source", entry.source}, {"reason", entry.reason}});
  document["skipped"] = std::move(skipped);
  document["remarks"] = remarks_;
  document["files"] = files_;
  // A path need not be UTF-8; JSON must be.
  out_ << document.dump(2, ' ', false, nlohmann::ordered_json::error_handler_t::replace) << '\n';
}

void SkipFlags::add_to(CommandLine& line) {
  line.add_integer("--max-skipped", max_skipped_, 0, std::numeric_limits<std::int64_t>::max(),
                   "More skipped images than this end in exit code 4");
}

}  // namespace tambour::tools
