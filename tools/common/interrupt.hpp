// Ctrl-C and termination: a signal sets a flag, the work sees it and unwinds, so that no half-written file stays
// behind.
#pragma once

#include <memory>

#include "tambour/executor.hpp"

namespace tambour::tools {

/// SIGINT and SIGTERM set the flag; a second one ends the process at once. SIGPIPE and SIGXFSZ are
/// ignored: writing fails and tells.
void install_interrupt_handlers();

/// Number of the signal that arrived, 0 = none.
int interrupt_signal() noexcept;

/// Throws Error(interrupted) when a signal has arrived.
void stop_if_interrupted();

/// A pool of threads whose tasks are dropped once a signal has arrived; run() then throws Error(interrupted). Thereby
/// even stages that report no progress stop soon.
class InterruptibleExecutor final : public Executor {
 public:
  explicit InterruptibleExecutor(int threads) : pool_(threads) {}
  int workers() const noexcept override { return pool_.workers(); }
  void run(std::size_t tasks, const Task& body) override;

 private:
  ThreadPool pool_;
};

}  // namespace tambour::tools
