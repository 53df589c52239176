// Who runs independent tasks. The library starts no thread unless it is handed an executor that has some.
#pragma once

#include <cstddef>
#include <functional>
#include <memory>

namespace tambour {

/// Runs a number of independent tasks; implement it over your own pool to share threads with the library.
///
/// Results of the library never depend on the executor: tasks write to places of their own.
class Executor {
 public:
  using Task = std::function<void(std::size_t task, int worker)>;

  virtual ~Executor() = default;
  /// Number of workers; a task is told its worker in 0 .. workers()-1, so that scratch memory can be kept per worker.
  virtual int workers() const noexcept = 0;
  /// Runs task 0 .. tasks-1 and returns when all have ended. Rethrows the first exception of a task, after the
  /// running ones have ended; tasks not yet begun are then dropped. Not reentrant: a task must not call run().
  virtual void run(std::size_t tasks, const Task& body) = 0;
};

/// Runs every task in the calling thread.
class SerialExecutor final : public Executor {
 public:
  int workers() const noexcept override { return 1; }
  void run(std::size_t tasks, const Task& body) override;
};

/// A fixed number of threads that live as long as the pool. The calling thread of run() only waits.
/// Throws Error(invalid_argument) unless 1 <= threads <= 4096.
class ThreadPool final : public Executor {
 public:
  explicit ThreadPool(int threads);
  ~ThreadPool() override;
  ThreadPool(const ThreadPool&) = delete;
  ThreadPool& operator=(const ThreadPool&) = delete;

  int workers() const noexcept override;
  void run(std::size_t tasks, const Task& body) override;

 private:
  struct State;
  std::unique_ptr<State> state_;
};

}  // namespace tambour
