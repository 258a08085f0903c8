#pragma once

#include <memory>

#include "exact/executor.hpp"

namespace spinsieve {

/// Runs loop bodies on a pool of threads and shows progress on a terminal.
class TbbExecutor final : public Executor {
 public:
  enum class Progress { silent, terminal };

  /// threads: 0 means as many as the machine has. With Progress::terminal one line of standard
  /// error is rewritten in place; the destructor clears it.
  TbbExecutor(int threads, Progress progress);
  TbbExecutor(const TbbExecutor&) = delete;
  TbbExecutor& operator=(const TbbExecutor&) = delete;
  TbbExecutor(TbbExecutor&&) = delete;
  TbbExecutor& operator=(TbbExecutor&&) = delete;
  ~TbbExecutor() override;

  void for_each(std::size_t count, const std::function<void(std::size_t)>& body) override;
  void progress(const char* what, double fraction) override;

 private:
  struct Pool;
  std::unique_ptr<Pool> pool_;
};

}  // namespace spinsieve
