// How long work tells its caller where it is, and how the caller stops it.
#pragma once

#include <cstddef>
#include <string_view>

namespace tambour {

/// Called from the thread that started the work, never from two threads at once.
class ProgressSink {
 public:
  virtual ~ProgressSink() = default;
  /// `done` of `total` units of the named stage are finished.
  virtual void advance(std::string_view stage, std::size_t done, std::size_t total) = 0;
  /// True asks the work to end; it then throws Error(interrupted).
  virtual bool stop_requested() const { return false; }
};

/// Ignores everything.
class NoProgress final : public ProgressSink {
 public:
  void advance(std::string_view, std::size_t, std::size_t) override {}
};

}  // namespace tambour
