#pragma once

#include <filesystem>
#include <string>
#include <vector>

namespace spinsieve {

/// What a run of the program left behind.
struct Outcome {
  int exit_code = 0;  ///< 128 + signal when a signal ended it.
  std::string output;
  std::string errors;
};

struct RunOptions {
  std::filesystem::path folder;          ///< Where it runs; the source tree without one.
  std::string input;                     ///< Standard input.
  std::vector<std::string> environment;  ///< "NAME=VALUE" on top of the test's own.
  bool interrupted = false;              ///< Keep standard input open and send SIGINT.
  bool reader_closes = false;            ///< Close standard output before it writes.
  std::filesystem::path output_file;     ///< Standard output goes there instead.
};

/// Runs the program that was built with the tests.
Outcome run_program(const std::vector<std::string>& arguments, const RunOptions& options = {});

/// The words of a command line as the recordings have them: blanks separate, '…' groups.
std::vector<std::string> words_of(const std::string& command);

std::string file_text(const std::filesystem::path& file);

/// A new empty folder that goes away with the object.
class ScratchFolder {
 public:
  ScratchFolder();
  ScratchFolder(const ScratchFolder&) = delete;
  ScratchFolder& operator=(const ScratchFolder&) = delete;
  ScratchFolder(ScratchFolder&&) = delete;
  ScratchFolder& operator=(ScratchFolder&&) = delete;
  ~ScratchFolder();
  const std::filesystem::path& path() const { return path_; }
  std::vector<std::string> entries() const;  ///< Names of what lies in it, sorted.

 private:
  std::filesystem::path path_;
};

}  // namespace spinsieve
