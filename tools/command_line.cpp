#include "command_line.hpp"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <span>
#include <string_view>

#include <CLI/CLI.hpp>

#include "command.hpp"
#include "exact/error.hpp"
#include "report/version.hpp"

namespace spinsieve {
namespace {

constexpr std::string_view see_help = "; spinsieve --help lists what is accepted";
constexpr int most_threads = 1024;

struct OptionText {
  std::string_view name;
  std::string_view value;  ///< Empty for a flag.
  std::string_view meaning;
};

constexpr std::array<OptionText, 13> option_texts = {{
    {"--json", "", "print the result as JSON, for programs"},
    {"--format", "text|json", "the same choice, by name"},
    {"--out", "FILE", "write to FILE, whole or not at all, instead of standard output"},
    {"--force", "", "let --out overwrite a file"},
    {"--threads", "N", "use N threads (default: all of the machine); results do not depend on it"},
    {"--seed", "N", "start of the random starting points (default 1)"},
    {"--phase", "plus|minus", "print Fourier components for exp(+2πi k·L), or for exp(−2πi k·L)"},
    {"--candidate", "ID", "one candidate of the list that enumerate prints, such as 3a"},
    {"--set", "NAME=VALUE", "a parameter of the candidate in µB; may be repeated"},
    {"--ascii", "", "print with plain letters only"},
    {"--quiet", "", "no warnings and no progress on standard error"},
    {"--version", "", "print the version"},
    {"--help", "", "print help; after a command, help on that command"},
}};

bool applies(const OptionText& option, const Command* command) {
  if (option.name == "--candidate") return command == nullptr || command->takes_candidate;
  if (option.name == "--set") return command == nullptr || command->takes_parameters;
  return true;
}

std::string option_list(const Command* command) {
  std::string text = "Options\n";
  for (const OptionText& option : option_texts) {
    if (!applies(option, command)) continue;
    std::string left = "  " + std::string(option.name);
    if (!option.value.empty()) left += " " + std::string(option.value);
    left.resize(std::max<std::size_t>(left.size() + 2, 24), ' ');
    text += left + std::string(option.meaning) + "\n";
  }
  return text;
}

std::string general_help() {
  std::string text =
      "spinsieve: which ordered arrangements of the moments does a crystal allow, and which of\n"
      "them do measured magnetic neutron peaks leave standing?\n\n"
      "Use\n"
      "  spinsieve COMMAND JOB.yaml [options]      JOB.yaml may be - for standard input\n\n"
      "Commands\n";
  for (const Command& command : commands()) {
    std::string left = "  " + std::string(command.name);
    left.resize(14, ' ');
    text += left + std::string(command.summary) + "\n";
  }
  text += "\n" + option_list(nullptr);
  text +=
      "\nExit codes\n"
      "  0 done   2 the job or the call is wrong   3 a limit was reached   130 interrupted\n"
      "  1 a fault of the program itself\n\n"
      "spinsieve COMMAND --help explains a command, with a small job.\n";
  return text;
}

std::string command_help(const Command& command) {
  return "spinsieve " + std::string(command.name) + " JOB.yaml [options]\n\n" +
         std::string(command.help) + "\n" + option_list(&command);
}

std::size_t edit_distance(std::string_view a, std::string_view b) {
  std::vector<std::size_t> row(b.size() + 1);
  for (std::size_t j = 0; j <= b.size(); ++j) row[j] = j;
  for (std::size_t i = 1; i <= a.size(); ++i) {
    std::size_t diagonal = row[0];
    row[0] = i;
    for (std::size_t j = 1; j <= b.size(); ++j) {
      const std::size_t replaced = diagonal + (a[i - 1] == b[j - 1] ? 0 : 1);
      diagonal = row[j];
      row[j] = std::min({replaced, row[j] + 1, row[j - 1] + 1});
    }
  }
  return row.back();
}

/// "; did you mean X?", or what else helps when nothing is near.
std::string suggestion(std::string_view given, std::span<const std::string_view> known) {
  std::string_view nearest;
  std::size_t least = 3;  // Two slips of the finger at most.
  for (const std::string_view name : known) {
    const std::size_t distance = edit_distance(given, name);
    if (distance < least) {
      least = distance;
      nearest = name;
    }
  }
  if (nearest.empty()) return std::string(see_help);
  return "; did you mean " + std::string(nearest) + "?";
}

template <class Number>
std::optional<Number> number(std::string_view text) {
  Number value{};
  const auto [end, fault] = std::from_chars(text.data(), text.data() + text.size(), value);
  if (fault != std::errc() || end != text.data() + text.size()) return std::nullopt;
  return value;
}

std::pair<std::string, double> parameter(const std::string& text) {
  const std::size_t equals = text.find('=');
  const std::optional<double> value =
      equals == std::string::npos ? std::nullopt
                                  : number<double>(std::string_view(text).substr(equals + 1));
  if (equals == 0 || !value || !std::isfinite(*value))
    throw Error("--set '" + text + "' is not NAME=VALUE with a number, such as u=3.7");
  return {text.substr(0, equals), *value};
}

/// The texts as CLI11 hands them over, one list per option.
struct RawOptions {
  bool json = false;
  bool force = false;
  bool ascii = false;
  bool quiet = false;
  bool version = false;
  bool help = false;
  std::vector<std::string> format, out, threads, seed, phase, candidate, set, words;
};

const std::string* single(const char* option, const std::vector<std::string>& values) {
  if (values.size() > 1) throw Error(std::string(option) + " is given twice; once is accepted");
  return values.empty() ? nullptr : &values.front();
}

[[noreturn]] void refuse_unknown(const std::string& argument) {
  std::array<std::string_view, option_texts.size()> names;
  std::ranges::transform(option_texts, names.begin(), &OptionText::name);
  const std::string name = argument.substr(0, argument.find('='));
  throw Error("unknown option '" + name + "'" + suggestion(name, names));
}

RawOptions read_raw(const std::vector<std::string>& arguments) {
  RawOptions raw;
  CLI::App app;
  app.set_help_flag();
  app.add_flag("--json", raw.json);
  app.add_flag("--force", raw.force);
  app.add_flag("--ascii", raw.ascii);
  app.add_flag("-q,--quiet", raw.quiet);
  app.add_flag("--version", raw.version);
  app.add_flag("-h,--help", raw.help);
  const auto text_option = [&app](const char* name, std::vector<std::string>& values) {
    app.add_option(name, values)->allow_extra_args(false);
  };
  text_option("--format", raw.format);
  text_option("-o,--out", raw.out);
  text_option("--threads", raw.threads);
  text_option("--seed", raw.seed);
  text_option("--phase", raw.phase);
  text_option("--candidate", raw.candidate);
  text_option("--set", raw.set);
  app.add_option("words", raw.words);
  app.allow_extras();
  try {
    std::vector<std::string> reversed(arguments.rbegin(), arguments.rend());
    app.parse(reversed);
  } catch (const CLI::ArgumentMismatch& mismatch) {
    const std::string what = mismatch.what();
    throw Error(what.substr(0, what.find_first_of(": ")) + " needs a value" +
                std::string(see_help));
  } catch (const CLI::Error& fault) {
    throw Error("the call cannot be read (" + std::string(fault.what()) + ")" +
                std::string(see_help));
  }
  if (!app.remaining().empty()) refuse_unknown(app.remaining().front());
  return raw;
}

const Command& known_command(const std::string& name) {
  if (const Command* command = find_command(name)) return *command;
  if (is_planned(name))
    throw Error("the command " + name + " is not available in version " + std::string(version()) +
                "; spinsieve --help lists those that are");
  std::vector<std::string_view> names;
  for (const Command& command : commands()) names.push_back(command.name);
  throw Error("unknown command '" + name + "'" + suggestion(name, names));
}

void read_values(const RawOptions& raw, CommandLine& call) {
  if (const std::string* format = single("--format", raw.format)) {
    if (*format != "text" && *format != "json")
      throw Error("--format '" + *format + "' is not known; text and json are accepted");
    if (raw.json && *format == "text")
      throw Error("--json and --format text contradict each other");
    if (*format == "json") call.form = OutputForm::json;
  }
  if (raw.json) call.form = OutputForm::json;
  if (const std::string* file = single("--out", raw.out)) call.destination.file = *file;
  call.destination.overwrite = raw.force;
  if (const std::string* threads = single("--threads", raw.threads)) {
    const std::optional<int> count = number<int>(*threads);
    if (!count || *count < 1 || *count > most_threads)
      throw Error("--threads '" + *threads + "' is not a whole number from 1 to " +
                  std::to_string(most_threads));
    call.threads = *count;
  }
  if (const std::string* seed = single("--seed", raw.seed)) {
    const std::optional<std::uint64_t> value = number<std::uint64_t>(*seed);
    if (!value) throw Error("--seed '" + *seed + "' is not a whole number, 0 or more");
    call.seed = *value;
  }
  if (const std::string* phase = single("--phase", raw.phase)) {
    if (*phase != "plus" && *phase != "minus")
      throw Error("--phase '" + *phase + "' is not known; plus and minus are accepted");
    if (*phase == "minus") call.phase = PhaseSign::minus;
  }
  if (const std::string* id = single("--candidate", raw.candidate)) call.candidate = *id;
  for (const std::string& text : raw.set) call.parameters.push_back(parameter(text));
  call.quiet = raw.quiet;
  call.ascii = raw.ascii;
}

}  // namespace

ParsedCall parse_command_line(const std::vector<std::string>& arguments) {
  const RawOptions raw = read_raw(arguments);
  ParsedCall parsed;
  if (raw.help) {
    const bool on_command = !raw.words.empty();
    parsed.answer =
        Answer{on_command ? command_help(known_command(raw.words.front())) : general_help()};
    return parsed;
  }
  if (raw.version) {
    parsed.answer = Answer{"spinsieve " + std::string(version()) + "\n"};
    return parsed;
  }
  if (raw.words.empty()) throw Error("no command is given" + std::string(see_help));
  const Command& command = known_command(raw.words.front());
  CommandLine& call = parsed.call;
  call.command = command.name;
  if (raw.words.size() < 2)
    throw Error("no job is given; spinsieve " + call.command +
                " JOB.yaml is accepted, and - for standard input");
  if (raw.words.size() > 2)
    throw Error("unexpected argument '" + raw.words[2] + "'; one job is accepted");
  call.job = raw.words[1];
  read_values(raw, call);
  if (call.candidate && !command.takes_candidate)
    throw Error("the command " + call.command + " does not take --candidate");
  if (!call.parameters.empty() && !command.takes_parameters)
    throw Error("the command " + call.command + " does not take --set");
  return parsed;
}

}  // namespace spinsieve
