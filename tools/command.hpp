#pragma once

#include <span>
#include <string>
#include <string_view>

#include "command_line.hpp"
#include "exact/executor.hpp"

namespace spinsieve {

/// What a command hands back: the document, and the limit it met when it is not complete.
struct Outcome {
  std::string document;
  std::string limit;  ///< Empty when the work is complete; else exit code 3.
};

/// One command of the program.
struct Command {
  std::string_view name;
  std::string_view summary;  ///< One line for the list of commands.
  std::string_view help;     ///< What it does, with a small example.
  bool takes_candidate = false;
  bool takes_parameters = false;
  Outcome (*run)(const CommandLine& call, Executor& executor) = nullptr;
};

Outcome run_modes(const CommandLine& call, Executor& executor);
Outcome run_enumerate(const CommandLine& call, Executor& executor);
Outcome run_peaks(const CommandLine& call, Executor& executor);
Outcome run_rank(const CommandLine& call, Executor& executor);
Outcome run_locate(const CommandLine& call, Executor& executor);

/// The commands that work, in the order of a person's work.
std::span<const Command> commands();
/// Null when the name is unknown.
const Command* find_command(std::string_view name);
/// Named in the plan of the program, and not working yet.
bool is_planned(std::string_view name);

}  // namespace spinsieve
