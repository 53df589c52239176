#include "common/interrupt.hpp"

#include <atomic>
#include <csignal>

#include "tambour/error.hpp"

namespace tambour::tools {
namespace {

std::atomic<int> arrived{0};
static_assert(std::atomic<int>::is_always_lock_free, "a signal handler may only touch lock-free atomics");

extern "C" void remember_signal(int signal) {
  arrived.store(signal);
  // The next one takes its usual course: a person who insists is not kept waiting.
  std::signal(signal, SIG_DFL);
}

}  // namespace

void install_interrupt_handlers() {
  arrived.store(0);
  std::signal(SIGINT, remember_signal);
  std::signal(SIGTERM, remember_signal);
  std::signal(SIGPIPE, SIG_IGN);
  std::signal(SIGXFSZ, SIG_IGN);
}

int interrupt_signal() noexcept { return arrived.load(); }

void stop_if_interrupted() {
  if (interrupt_signal() != 0)
    throw Error(ErrorCode::interrupted, "interrupted: nothing half-written was left in place");
}

void InterruptibleExecutor::run(std::size_t tasks, const Task& body) {
  pool_.run(tasks, [&body](std::size_t task, int worker) {
    stop_if_interrupted();
    body(task, worker);
  });
}

}  // namespace tambour::tools
