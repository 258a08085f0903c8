#include "tbb_executor.hpp"

#include <chrono>
#include <cstdio>
#include <exception>
#include <vector>

#include <oneapi/tbb/parallel_for.h>
#include <oneapi/tbb/task_arena.h>

namespace spinsieve {

struct TbbExecutor::Pool {
  explicit Pool(int threads)
      : arena(threads > 0 ? threads : oneapi::tbb::task_arena::automatic), serial(threads == 1) {}

  oneapi::tbb::task_arena arena;
  bool serial;
  bool shows_progress = false;
  bool line_shown = false;
  std::chrono::steady_clock::time_point last_shown = std::chrono::steady_clock::now();
};

TbbExecutor::TbbExecutor(int threads, Progress progress) : pool_(std::make_unique<Pool>(threads)) {
  pool_->shows_progress = progress == Progress::terminal;
}

TbbExecutor::~TbbExecutor() {
  if (pool_->line_shown) std::fputs("\r\033[K", stderr);
}

void TbbExecutor::for_each(std::size_t count, const std::function<void(std::size_t)>& body) {
  // A failed body does not stop the others, so that the exception rethrown is that of the lowest
  // index whatever the number of threads.
  std::vector<std::exception_ptr> failures(count);
  const auto guarded = [&](std::size_t i) {
    try {
      body(i);
    } catch (...) {
      failures[i] = std::current_exception();
    }
  };
  if (pool_->serial || count < 2) {
    for (std::size_t i = 0; i < count; ++i) guarded(i);
  } else {
    pool_->arena.execute(
        [&] { oneapi::tbb::parallel_for(std::size_t{0}, count, std::size_t{1}, guarded); });
  }
  for (const std::exception_ptr& failure : failures)
    if (failure) std::rethrow_exception(failure);
}

void TbbExecutor::progress(const char* what, double fraction) {
  if (!pool_->shows_progress) return;
  const auto now = std::chrono::steady_clock::now();
  if (now - pool_->last_shown < std::chrono::milliseconds(200)) return;
  pool_->last_shown = now;
  pool_->line_shown = true;
  std::fprintf(stderr, "\r\033[K%s %3.0f %%", what, 100 * fraction);
}

}  // namespace spinsieve
