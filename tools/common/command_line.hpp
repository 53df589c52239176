// One tool's command line: the flags that every tool has, and ways to add its own.
#pragma once

#include <cstdint>
#include <functional>
#include <memory>
#include <optional>
#include <ostream>
#include <string>
#include <utility>
#include <vector>

#include "common/guarded_main.hpp"

namespace tambour::tools {

/// Flags of every tool: --help, --version, --out, --force, --threads, --quiet, --json.
///
/// Values are read strictly (parse.hpp). An option takes the word after it whatever it looks like, so that
/// `--centre -3,4` is a centre and not a flag.
class CommandLine {
 public:
  CommandLine(std::string tool, const std::string& what_it_does);
  ~CommandLine();
  CommandLine(const CommandLine&) = delete;
  CommandLine& operator=(const CommandLine&) = delete;

  // Options of the tool itself. Targets hold the default and must outlive parse(). `description` is shown by --help.
  void add_flag(const std::string& name, bool& target, const std::string& description);
  /// `type` stands for the value in the help.
  void add_text(const std::string& name, std::string& target, const std::string& type, const std::string& description);
  void add_number(const std::string& name, double& target, const std::string& description);
  void add_number(const std::string& name, std::optional<double>& target, const std::string& description);
  void add_integer(const std::string& name, std::int64_t& target, std::int64_t lowest, std::int64_t highest,
                   const std::string& description);
  void add_integer(const std::string& name, std::optional<std::int64_t>& target, std::int64_t lowest,
                   std::int64_t highest, const std::string& description);
  void add_choice(const std::string& name, std::string& target, const std::vector<std::string>& choices,
                  const std::string& description);
  /// What stands on the command line without a flag before it; must be given.
  void add_input(const std::string& name, std::string& target, const std::string& description);
  void add_inputs(const std::string& name, std::vector<std::string>& target, const std::string& description);

  void require(const std::string& flag);
  void exclude(const std::string& flag, const std::string& other);
  /// Called at the end of parse(), before any file is touched; throws Error(invalid_argument) on values out of range.
  void add_check(std::function<void()> check) { checks_.push_back(std::move(check)); }

  /// False when --help or --version has been answered on `out` and nothing is left to do.
  /// Throws Error(invalid_argument) on a usage error.
  bool parse(const Arguments& arguments, std::ostream& out);

  /// True when the user gave the flag.
  bool given(const std::string& flag) const;
  const std::string& tool() const noexcept { return tool_; }
  /// The whole command, quoted for a shell.
  const std::string& command() const noexcept { return command_; }
  /// Every option with its value, defaults included.
  std::vector<std::pair<std::string, std::string>> options() const;

  const std::string& out() const noexcept { return out_; }
  bool force() const noexcept { return force_; }
  bool quiet() const noexcept { return quiet_; }
  bool json() const noexcept { return json_; }
  int threads() const noexcept { return static_cast<int>(threads_); }

 private:
  struct Parser;
  using Take = std::function<void(const std::string& flag, const std::string& text)>;

  void add_parsed(const std::string& name, const std::string& type, const std::string& shown_default,
                  const std::string& description, Take take);

  std::string tool_;
  std::unique_ptr<Parser> parser_;
  std::vector<std::function<void()>> checks_;
  std::string command_;
  std::string out_;
  bool force_ = false;
  bool quiet_ = false;
  bool json_ = false;
  std::int64_t threads_ = 1;
};

}  // namespace tambour::tools
