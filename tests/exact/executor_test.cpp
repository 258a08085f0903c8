#include "exact/executor.hpp"

#include <stdexcept>
#include <vector>

#include <gtest/gtest.h>

namespace spinsieve {
namespace {

TEST(ExecutorTest, EveryIndexRunsOnce) {
  Executor serial;
  std::vector<int> runs(100, 0);
  serial.for_each(runs.size(), [&runs](std::size_t i) { ++runs[i]; });
  EXPECT_EQ(runs, std::vector<int>(100, 1));
  serial.for_each(0, [](std::size_t) { FAIL(); });
}

TEST(ExecutorTest, TheExceptionOfTheLowestIndexArrives) {
  Executor serial;
  try {
    serial.for_each(10, [](std::size_t i) {
      if (i >= 3) throw std::runtime_error(std::to_string(i));
    });
    FAIL();
  } catch (const std::runtime_error& error) {
    EXPECT_STREQ(error.what(), "3");
  }
}

}  // namespace
}  // namespace spinsieve
