// A progress line for people.
#pragma once

#include <ostream>
#include <string>

#include "tambour/progress.hpp"

namespace tambour::tools {

/// Draws one line that is overwritten in place, and passes a signal on as a wish to stop.
class ProgressBar final : public ProgressSink {
 public:
  /// `stream`: where to draw, or null for nowhere.
  explicit ProgressBar(std::ostream* stream) : stream_(stream) {}
  ~ProgressBar() override { clear(); }

  void advance(std::string_view stage, std::size_t done, std::size_t total) override;
  bool stop_requested() const override;
  /// Wipes the line, before something else is printed.
  void clear();

 private:
  std::ostream* stream_;
  std::string drawn_;
};

/// The stream itself when it is the process' standard error and that is a terminal; else null.
std::ostream* terminal_or_null(std::ostream& err);

}  // namespace tambour::tools
