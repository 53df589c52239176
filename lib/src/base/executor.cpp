#include "tambour/executor.hpp"

#include <condition_variable>
#include <exception>
#include <mutex>
#include <system_error>
#include <thread>
#include <vector>

#include "base/check.hpp"

namespace tambour {

void SerialExecutor::run(std::size_t tasks, const Task& body) {
  for (std::size_t task = 0; task < tasks; ++task) body(task, 0);
}

struct ThreadPool::State {
  std::mutex mutex;
  std::condition_variable wake, finished;
  const Task* body = nullptr;
  std::size_t next = 0, tasks = 0, running = 0;
  std::exception_ptr failure;
  bool closing = false;
  std::vector<std::thread> threads;

  void close() {
    {
      const std::lock_guard lock(mutex);
      closing = true;
    }
    wake.notify_all();
    for (auto& thread : threads) thread.join();
  }

  void work(int worker) {
    std::unique_lock lock(mutex);
    while (true) {
      wake.wait(lock, [&] { return closing || next < tasks; });
      if (closing) return;
      const std::size_t task = next++;
      ++running;
      const Task* current = body;
      lock.unlock();
      std::exception_ptr thrown;
      try {
        (*current)(task, worker);
      } catch (...) {
        thrown = std::current_exception();
      }
      lock.lock();
      if (thrown && !failure) {
        failure = thrown;
        next = tasks;
      }
      --running;
      if (running == 0 && next >= tasks) finished.notify_all();
    }
  }
};

ThreadPool::ThreadPool(int threads) : state_(std::make_unique<State>()) {
  require(threads >= 1 && threads <= 4096, "threads", threads, "1 to 4096");
  try {
    for (int worker = 0; worker < threads; ++worker)
      state_->threads.emplace_back([state = state_.get(), worker] { state->work(worker); });
  } catch (const std::system_error& problem) {
    state_->close();
    throw Error(ErrorCode::invalid_argument, fmt::format("threads is {}; the system gives no more than {} ({})",
                                                         threads, state_->threads.size(), problem.what()));
  }
}

ThreadPool::~ThreadPool() { state_->close(); }

int ThreadPool::workers() const noexcept { return static_cast<int>(state_->threads.size()); }

void ThreadPool::run(std::size_t tasks, const Task& body) {
  if (tasks == 0) return;
  std::unique_lock lock(state_->mutex);
  state_->body = &body;
  state_->next = 0;
  state_->tasks = tasks;
  state_->failure = nullptr;
  state_->wake.notify_all();
  state_->finished.wait(lock, [&] { return state_->running == 0 && state_->next >= state_->tasks; });
  state_->tasks = state_->next = 0;
  if (state_->failure) std::rethrow_exception(state_->failure);
}

}  // namespace tambour
