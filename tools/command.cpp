#include "command.hpp"

#include <algorithm>
#include <array>

namespace spinsieve {
namespace {

constexpr std::array<std::string_view, 10> planned = {"start",  "modes", "enumerate", "peaks",
                                                      "locate", "rank",  "separate",  "defend",
                                                      "export", "report"};

}  // namespace

std::span<const Command> commands() { return {}; }

const Command* find_command(std::string_view name) {
  const std::span<const Command> all = commands();
  const auto found = std::ranges::find(all, name, &Command::name);
  return found == all.end() ? nullptr : &*found;
}

bool is_planned(std::string_view name) {
  return std::ranges::find(planned, name) != planned.end() && find_command(name) == nullptr;
}

}  // namespace spinsieve
