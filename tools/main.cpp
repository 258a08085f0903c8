#include <cstdio>
#include <exception>
#include <new>
#include <stdexcept>
#include <string>
#include <vector>

#include <unistd.h>

#include "command.hpp"
#include "command_line.hpp"
#include "exact/error.hpp"
#include "output.hpp"
#include "tbb_executor.hpp"

namespace spinsieve {
namespace {

enum ExitCode : int { done = 0, our_fault = 1, wrong_input = 2, limit_reached = 3 };

void complain(const std::string& text) { std::fprintf(stderr, "%s\n", text.c_str()); }

int run(const std::vector<std::string>& arguments) {
  const ParsedCall parsed = parse_command_line(arguments);
  if (parsed.answer) {
    write(Destination{}, parsed.answer->text);
    return done;
  }
  const CommandLine& call = parsed.call;
  require_writable(call.destination);
  const bool shows_progress = !call.quiet && ::isatty(STDERR_FILENO) == 1;
  Outcome outcome;
  {
    TbbExecutor executor(call.threads, shows_progress ? TbbExecutor::Progress::terminal
                                                      : TbbExecutor::Progress::silent);
    outcome = find_command(call.command)->run(call, executor);
  }
  write(call.destination, outcome.document);
  if (outcome.limit.empty()) return done;
  complain("spinsieve: limit reached: " + outcome.limit);
  return limit_reached;
}

int run_and_report(const std::vector<std::string>& arguments) {
  try {
    return run(arguments);
  } catch (const ReaderGone&) {
    return done;
  } catch (const Error& error) {
    complain(error.place().known() ? std::string(error.what())
                                   : "spinsieve: error: " + error.message());
    return wrong_input;
  } catch (const LimitReached& limit) {
    complain(std::string("spinsieve: limit reached: ") + limit.what());
    return limit_reached;
  } catch (const std::bad_alloc&) {
    complain("spinsieve: limit reached: the memory of this machine");
    return limit_reached;
  } catch (const std::exception& fault) {
    complain(std::string("spinsieve: internal error: ") + fault.what() +
             "; please report it together with the job file");
    return our_fault;
  }
}

}  // namespace
}  // namespace spinsieve

int main(int count, char** arguments) {
  spinsieve::handle_signals();
  return spinsieve::run_and_report(std::vector<std::string>(arguments + 1, arguments + count));
}
