#pragma once

#include <cstddef>
#include <functional>

namespace spinsieve {

/// Runs independent loop bodies; the base class runs them one after another.
///
/// Bodies write results by index and reductions follow serially, so output never depends on the
/// executor. A body may throw: the exception of the lowest index is rethrown after all have ended.
class Executor {
 public:
  Executor() = default;
  Executor(const Executor&) = delete;
  Executor& operator=(const Executor&) = delete;
  Executor(Executor&&) = delete;
  Executor& operator=(Executor&&) = delete;
  virtual ~Executor() = default;

  /// Calls body(i) once for every 0 ≤ i < count.
  virtual void for_each(std::size_t count, const std::function<void(std::size_t)>& body);

  /// Called by long work now and then, from the calling thread only. Base class: nothing.
  virtual void progress(const char* what, double fraction);
};

}  // namespace spinsieve
