#include "tambour/executor.hpp"

#include <gtest/gtest.h>

#include <atomic>
#include <stdexcept>

#include "tambour/error.hpp"

namespace tambour {
namespace {

TEST(ThreadPool, RunsEveryTaskOnceWithAWorkerInRange) {
  ThreadPool pool(3);
  for (int round = 0; round < 50; ++round) {
    std::vector<std::atomic<int>> hits(101);
    std::atomic<bool> in_range = true;
    pool.run(hits.size(), [&](std::size_t task, int worker) {
      ++hits[task];
      if (worker < 0 || worker >= 3) in_range = false;
    });
    for (const auto& hit : hits) ASSERT_EQ(hit, 1);
    ASSERT_TRUE(in_range);
  }
  pool.run(0, [](std::size_t, int) { FAIL(); });
}

TEST(ThreadPool, PassesOnTheFirstExceptionAndStaysUsable) {
  ThreadPool pool(2);
  std::atomic<int> ran = 0;
  EXPECT_THROW(pool.run(1000,
                        [&](std::size_t task, int) {
                          ++ran;
                          if (task == 3) throw std::runtime_error("three");
                        }),
               std::runtime_error);
  EXPECT_LT(ran, 1000);
  ran = 0;
  pool.run(10, [&](std::size_t, int) { ++ran; });
  EXPECT_EQ(ran, 10);
}

TEST(ThreadPool, RefusesSillyCounts) {
  EXPECT_THROW(ThreadPool(0), Error);
  EXPECT_THROW(ThreadPool(5000), Error);
}

TEST(SerialExecutor, KeepsTheOrder) {
  SerialExecutor serial;
  std::vector<std::size_t> order;
  serial.run(4, [&](std::size_t task, int worker) {
    EXPECT_EQ(worker, 0);
    order.push_back(task);
  });
  EXPECT_EQ(order, (std::vector<std::size_t>{0, 1, 2, 3}));
}

}  // namespace
}  // namespace tambour
