#include "program.hpp"

#include <algorithm>
#include <array>
#include <csignal>
#include <cstdlib>
#include <fstream>
#include <sstream>
#include <stdexcept>

#include <fcntl.h>
#include <poll.h>
#include <sys/wait.h>
#include <unistd.h>

namespace spinsieve {
namespace {

std::array<int, 2> make_pipe() {
  std::array<int, 2> ends{};
  if (::pipe2(ends.data(), O_CLOEXEC) != 0) throw std::runtime_error("pipe");
  return ends;
}

/// Reads both pipes until both are closed.
void drain(int output, std::string& output_text, int errors, std::string& error_text) {
  std::array<pollfd, 2> ends{pollfd{output, POLLIN, 0}, pollfd{errors, POLLIN, 0}};
  std::array<std::string*, 2> texts{&output_text, &error_text};
  std::array<char, 65536> buffer{};
  while (ends[0].fd >= 0 || ends[1].fd >= 0) {
    ::poll(ends.data(), ends.size(), -1);
    for (std::size_t i = 0; i < ends.size(); ++i) {
      if (ends[i].fd < 0 || ends[i].revents == 0) continue;
      const ssize_t count = ::read(ends[i].fd, buffer.data(), buffer.size());
      if (count <= 0)
        ends[i].fd = -1;
      else
        texts[i]->append(buffer.data(), static_cast<std::size_t>(count));
    }
  }
}

}  // namespace

Outcome run_program(const std::vector<std::string>& arguments, const RunOptions& options) {
  const std::array<int, 2> input = make_pipe();
  const std::array<int, 2> output = make_pipe();
  const std::array<int, 2> errors = make_pipe();
  const pid_t child = ::fork();
  if (child < 0) throw std::runtime_error("fork");
  if (child == 0) {
    ::dup2(input[0], STDIN_FILENO);
    if (options.output_file.empty()) {
      ::dup2(output[1], STDOUT_FILENO);
    } else {
      ::dup2(::open(options.output_file.c_str(), O_WRONLY), STDOUT_FILENO);
    }
    ::dup2(errors[1], STDERR_FILENO);
    const std::string folder =
        options.folder.empty() ? SPINSIEVE_SOURCE_DIR : options.folder.string();
    if (::chdir(folder.c_str()) != 0) ::_exit(127);
    for (const std::string& variable : options.environment)
      ::putenv(const_cast<char*>(variable.c_str()));
    std::vector<char*> argv{const_cast<char*>(SPINSIEVE_PROGRAM)};
    for (const std::string& argument : arguments)
      argv.push_back(const_cast<char*>(argument.c_str()));
    argv.push_back(nullptr);
    ::execv(SPINSIEVE_PROGRAM, argv.data());
    ::_exit(127);
  }
  ::close(input[0]);
  ::close(output[1]);
  ::close(errors[1]);
  Outcome run;
  int output_end = output[0];
  if (options.reader_closes) {
    ::close(output_end);
    output_end = -1;
  }
  // Jobs are far smaller than the buffer of a pipe, so writing first cannot block.
  if (::write(input[1], options.input.data(), options.input.size()) < 0)
    throw std::runtime_error("write");
  if (options.interrupted) {
    ::usleep(100'000);
    ::kill(child, SIGINT);
  } else {
    ::close(input[1]);
  }
  drain(output_end, run.output, errors[0], run.errors);
  if (output_end >= 0) ::close(output_end);
  ::close(errors[0]);
  if (options.interrupted) ::close(input[1]);
  int status = 0;
  ::waitpid(child, &status, 0);
  run.exit_code = WIFEXITED(status) ? WEXITSTATUS(status) : 128 + WTERMSIG(status);
  return run;
}

std::vector<std::string> words_of(const std::string& command) {
  std::vector<std::string> words;
  std::string word;
  bool quoted = false;
  bool begun = false;
  for (const char c : command) {
    if (c == '\'') {
      quoted = !quoted;
      begun = true;
    } else if (c == ' ' && !quoted) {
      if (begun) words.push_back(word);
      word.clear();
      begun = false;
    } else {
      word += c;
      begun = true;
    }
  }
  if (begun) words.push_back(word);
  return words;
}

std::string file_text(const std::filesystem::path& file) {
  std::ifstream stream(file, std::ios::binary);
  if (!stream) throw std::runtime_error("cannot read " + file.string());
  std::ostringstream text;
  text << stream.rdbuf();
  return text.str();
}

ScratchFolder::ScratchFolder() {
  std::string name = (std::filesystem::temp_directory_path() / "spinsieve-test-XXXXXX").string();
  if (::mkdtemp(name.data()) == nullptr) throw std::runtime_error("mkdtemp");
  path_ = name;
}

ScratchFolder::~ScratchFolder() {
  std::error_code ignored;
  std::filesystem::remove_all(path_, ignored);
}

std::vector<std::string> ScratchFolder::entries() const {
  std::vector<std::string> names;
  for (const auto& entry : std::filesystem::directory_iterator(path_))
    names.push_back(entry.path().filename().string());
  std::ranges::sort(names);
  return names;
}

}  // namespace spinsieve
