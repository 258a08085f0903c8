#include "output.hpp"

#include <array>
#include <cerrno>
#include <csignal>
#include <cstdio>
#include <cstdlib>
#include <cstring>

#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include "exact/error.hpp"

namespace spinsieve {
namespace {

// What the signal handler must remove; an empty string when nothing is half written. A handler can
// reach nothing but objects of static storage.
constexpr std::size_t longest_path = 4096;
std::array<char, longest_path> half_written{};  // NOLINT(*-avoid-non-const-global-variables)

void on_interrupt(int signal) {
  if (half_written[0] != '\0') ::unlink(half_written.data());
  ::_exit(128 + signal);
}

std::string reason() { return std::strerror(errno); }  // NOLINT(concurrency-mt-unsafe)

void write_all(int descriptor, std::string_view text, const std::string& name) {
  while (!text.empty()) {
    const ssize_t written = ::write(descriptor, text.data(), text.size());
    if (written < 0) {
      if (errno == EINTR) continue;
      if (errno == EPIPE && descriptor == STDOUT_FILENO) throw ReaderGone();
      throw Error("cannot write " + name + ": " + reason());
    }
    text.remove_prefix(static_cast<std::size_t>(written));
  }
}

void write_to_device(const std::filesystem::path& file, std::string_view text) {
  const std::string name = "'" + file.string() + "'";
  const int descriptor = ::open(file.c_str(), O_WRONLY | O_CLOEXEC);
  if (descriptor < 0) throw Error("cannot write " + name + ": " + reason());
  try {
    write_all(descriptor, text, name);
  } catch (...) {
    ::close(descriptor);
    throw;
  }
  if (::close(descriptor) != 0) throw Error("cannot write " + name + ": " + reason());
}

/// The file beside the final one that holds the text until it is whole.
class TemporaryFile {
 public:
  explicit TemporaryFile(const std::filesystem::path& final_path)
      : path_(final_path.string() + ".part-XXXXXX"), final_path_(final_path) {
    if (path_.size() >= longest_path) throw Error("the path '" + path_ + "' is too long");
    descriptor_ = ::mkstemp(path_.data());
    if (descriptor_ < 0) throw Error("cannot write '" + final_path.string() + "': " + reason());
    std::memcpy(half_written.data() + 1, path_.c_str() + 1, path_.size());
    half_written[0] = path_[0];
  }
  TemporaryFile(const TemporaryFile&) = delete;
  TemporaryFile& operator=(const TemporaryFile&) = delete;
  TemporaryFile(TemporaryFile&&) = delete;
  TemporaryFile& operator=(TemporaryFile&&) = delete;
  ~TemporaryFile() {
    if (descriptor_ >= 0) ::close(descriptor_);
    if (!kept_) ::unlink(path_.c_str());
    half_written[0] = '\0';
  }

  void fill(std::string_view text) const {
    write_all(descriptor_, text, "'" + final_path_.string() + "'");
  }

  void keep(bool overwrite) {
    const std::string name = "'" + final_path_.string() + "'";
    const mode_t mask = ::umask(0);
    ::umask(mask);
    if (::fchmod(descriptor_, 0666 & ~mask) != 0 || ::fsync(descriptor_) != 0)
      throw Error("cannot write " + name + ": " + reason());
    const int closed = ::close(descriptor_);
    descriptor_ = -1;
    if (closed != 0) throw Error("cannot write " + name + ": " + reason());
    if (move(overwrite) != 0)
      throw Error(errno == EEXIST ? name + " exists; --force overwrites it"
                                  : "cannot write " + name + ": " + reason());
    kept_ = true;
  }

 private:
  int move(bool overwrite) const {
    if (!overwrite) {
      // Refuses an existing name in one step, which a check before rename() would not.
      if (::renameat2(AT_FDCWD, path_.c_str(), AT_FDCWD, final_path_.c_str(), RENAME_NOREPLACE) ==
          0)
        return 0;
      if (errno != EINVAL && errno != ENOSYS) return -1;  // Those two: not on this file system.
      if (::access(final_path_.c_str(), F_OK) == 0) {
        errno = EEXIST;
        return -1;
      }
    }
    return ::rename(path_.c_str(), final_path_.c_str());
  }

  std::string path_;
  std::filesystem::path final_path_;
  int descriptor_ = -1;
  bool kept_ = false;
};

}  // namespace

void require_writable(const Destination& destination) {
  if (!destination.file) return;
  const std::filesystem::path& file = *destination.file;
  if (file.empty()) throw Error("--out '' names no file; a path is accepted");
  std::error_code ignored;
  if (std::filesystem::is_directory(file, ignored))
    throw Error("--out '" + file.string() + "' is a folder; a file is accepted");
  if (!destination.overwrite && std::filesystem::exists(file, ignored))
    throw Error("'" + file.string() + "' exists; --force overwrites it");
  const std::filesystem::path folder = file.has_parent_path() ? file.parent_path() : ".";
  if (::access(folder.c_str(), W_OK) != 0)
    throw Error("cannot write into the folder '" + folder.string() + "': " + reason());
}

void write(const Destination& destination, std::string_view text) {
  if (!destination.file) {
    write_all(STDOUT_FILENO, text, "standard output");
    return;
  }
  std::error_code ignored;
  const std::filesystem::path file = std::filesystem::weakly_canonical(*destination.file, ignored);
  if (std::filesystem::exists(file, ignored) && !std::filesystem::is_regular_file(file, ignored)) {
    write_to_device(file, text);  // Renaming onto a device would replace it.
    return;
  }
  TemporaryFile temporary(file.empty() ? *destination.file : file);
  temporary.fill(text);
  temporary.keep(destination.overwrite);
}

void handle_signals() {
  struct sigaction action {};
  action.sa_handler = on_interrupt;
  ::sigaction(SIGINT, &action, nullptr);
  ::sigaction(SIGTERM, &action, nullptr);
  std::signal(SIGPIPE, SIG_IGN);  // NOLINT(cert-err33-c)
}

}  // namespace spinsieve
