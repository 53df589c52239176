#include "common/command_line.hpp"

#include <fmt/format.h>

#include <CLI/CLI.hpp>
#include <algorithm>
#include <thread>

#include "common/all_versions.hpp"
#include "common/parse.hpp"
#include "tambour/error.hpp"
#include "tambour/provenance.hpp"
#include "tambour/version.hpp"

namespace tambour::tools {
namespace {

std::string version_text(const std::string& tool) {
  std::string text = fmt::format("{} {}", tool, version());
  for (const auto& [name, number] : all_library_versions()) text += fmt::format("\n  {} {}", name, number);
  return text;
}

std::int64_t integer_within(const std::string& flag, const std::string& text, std::int64_t lowest,
                            std::int64_t highest) {
  const std::int64_t number = parse_integer(flag, text);
  if (number < lowest || number > highest)
    throw Error(ErrorCode::invalid_argument, fmt::format("{} is {}; allowed is {} to {}", flag, text, lowest, highest),
                text, fmt::format("{} to {}", lowest, highest));
  return number;
}

}  // namespace

struct CommandLine::Parser {
  explicit Parser(const std::string& description, const std::string& name) : app(description, name) {}
  CLI::App app;
};

CommandLine::CommandLine(std::string tool, const std::string& what_it_does)
    : tool_(std::move(tool)), parser_(std::make_unique<Parser>(what_it_does, tool_)) {
  CLI::App& app = parser_->app;
  app.set_version_flag("--version", [this] { return version_text(tool_); })
      ->description("Print the version and those of the libraries underneath");
  app.set_help_flag("-h,--help", "Print this help");
  app.add_option("-o,--out", out_, "Where the result goes")->required()->type_name("FILE");
  add_flag("--force", force_, "Overwrite existing files");
  threads_ = std::clamp<std::int64_t>(std::thread::hardware_concurrency(), 1, 4096);
  add_integer("--threads", threads_, 1, 4096, "Threads; results do not depend on it");
  add_flag("--quiet", quiet_, "No summary, no remarks, no progress");
  add_flag("--json", json_, "Print one JSON document on standard output instead of the summary");
  app.footer(
      "Exit codes: 0 done; 2 usage; 3 bad input or output that cannot be written; 4 done, but more images were\n"
      "skipped than allowed; 70 a fault of the program; 130 interrupted (128 + signal).");
}

CommandLine::~CommandLine() = default;

void CommandLine::add_parsed(const std::string& name, const std::string& type, const std::string& shown_default,
                             const std::string& description, Take take) {
  parser_->app
      .add_option_function<std::string>(
          name, [name, take = std::move(take)](const std::string& text) { take(name, text); }, description)
      ->type_name(type)
      ->default_str(shown_default);
}

void CommandLine::add_flag(const std::string& name, bool& target, const std::string& description) {
  parser_->app.add_flag(name, target, description);
}

void CommandLine::add_text(const std::string& name, std::string& target, const std::string& type,
                           const std::string& description) {
  add_parsed(name, type, target, description,
             [&target](const std::string&, const std::string& text) { target = text; });
}

void CommandLine::add_number(const std::string& name, double& target, const std::string& description) {
  add_parsed(name, "NUMBER", fmt::format("{:.10g}", target), description,
             [&target](const std::string& flag, const std::string& text) { target = parse_number(flag, text); });
}

void CommandLine::add_number(const std::string& name, std::optional<double>& target, const std::string& description) {
  add_parsed(name, "NUMBER", "", description,
             [&target](const std::string& flag, const std::string& text) { target = parse_number(flag, text); });
}

void CommandLine::add_integer(const std::string& name, std::int64_t& target, std::int64_t lowest, std::int64_t highest,
                              const std::string& description) {
  add_parsed(name, "INTEGER", fmt::format("{}", target), description,
             [&target, lowest, highest](const std::string& flag, const std::string& text) {
               target = integer_within(flag, text, lowest, highest);
             });
}

void CommandLine::add_integer(const std::string& name, std::optional<std::int64_t>& target, std::int64_t lowest,
                              std::int64_t highest, const std::string& description) {
  add_parsed(name, "INTEGER", "", description,
             [&target, lowest, highest](const std::string& flag, const std::string& text) {
               target = integer_within(flag, text, lowest, highest);
             });
}

void CommandLine::add_choice(const std::string& name, std::string& target, const std::vector<std::string>& choices,
                             const std::string& description) {
  const std::string allowed = fmt::format("{}", fmt::join(choices, ", "));
  add_parsed(name, fmt::format("{{{}}}", fmt::join(choices, ",")), target, description,
             [&target, choices, allowed](const std::string& flag, const std::string& text) {
               if (std::find(choices.begin(), choices.end(), text) == choices.end())
                 throw Error(ErrorCode::invalid_argument,
                             fmt::format("{} is '{}'; allowed is one of {}", flag, text, allowed), text, allowed);
               target = text;
             });
}

void CommandLine::add_input(const std::string& name, std::string& target, const std::string& description) {
  parser_->app.add_option(name, target, description)->required()->type_name("FILE");
}

void CommandLine::add_inputs(const std::string& name, std::vector<std::string>& target,
                             const std::string& description) {
  parser_->app.add_option(name, target, description)->required()->type_name("FILE");
}

void CommandLine::require(const std::string& flag) { parser_->app.get_option(flag)->required(); }

void CommandLine::exclude(const std::string& flag, const std::string& other) {
  parser_->app.get_option(flag)->excludes(parser_->app.get_option(other));
}

bool CommandLine::parse(const Arguments& arguments, std::ostream& out) {
  command_ = tool_;
  for (const auto& argument : arguments) command_ += " " + shell_quote(argument);
  try {
    parser_->app.parse(Arguments(arguments.rbegin(), arguments.rend()));
  } catch (const CLI::CallForHelp&) {
    out << parser_->app.help();
    return false;
  } catch (const CLI::CallForVersion& answer) {
    out << answer.what() << '\n';
    return false;
  } catch (const CLI::ParseError& problem) {
    throw Error(ErrorCode::invalid_argument, problem.what());
  }
  for (const auto& check : checks_) check();
  return true;
}

bool CommandLine::given(const std::string& flag) const { return parser_->app.get_option(flag)->count() > 0; }

std::vector<std::pair<std::string, std::string>> CommandLine::options() const {
  std::vector<std::pair<std::string, std::string>> all;
  for (const CLI::Option* option : parser_->app.get_options()) {
    const std::string name = option->get_name();
    if (option->get_positional() || name == "--help" || name == "--version") continue;
    std::string value = fmt::format("{}", fmt::join(option->results(), " "));
    if (option->count() == 0) value = option->get_items_expected_max() == 0 ? "false" : option->get_default_str();
    all.emplace_back(name, value);
  }
  return all;
}

}  // namespace tambour::tools
