#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "output.hpp"
#include "report/conventions.hpp"

namespace spinsieve {

enum class OutputForm { text, json };

/// What the user asked for, as parsed: files are not opened yet.
struct CommandLine {
  std::string command;
  std::string job;  ///< A path, or "-" for standard input.
  OutputForm form = OutputForm::text;
  Destination destination;
  int threads = 0;  ///< 0: as many as the machine has.
  bool quiet = false;
  bool ascii = false;
  PhaseSign phase = PhaseSign::plus;
  std::uint64_t seed = 1;
  std::optional<std::string> candidate;
  std::vector<std::pair<std::string, double>> parameters;  ///< --set, in the order given.
};

/// Help and the version are answers too: text for standard output, and no command to run.
struct Answer {
  std::string text;
};

/// Reads the arguments after the program's name.
/// Throws Error with one sentence that says what is accepted.
struct ParsedCall {
  std::optional<Answer> answer;
  CommandLine call;
};
ParsedCall parse_command_line(const std::vector<std::string>& arguments);

}  // namespace spinsieve
