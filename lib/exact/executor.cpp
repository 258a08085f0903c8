#include "exact/executor.hpp"

namespace spinsieve {

void Executor::for_each(std::size_t count, const std::function<void(std::size_t)>& body) {
  for (std::size_t i = 0; i < count; ++i) body(i);
}

void Executor::progress(const char* /*what*/, double /*fraction*/) {}

}  // namespace spinsieve
