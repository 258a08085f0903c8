// Whole outputs of commands: what people and programs rely on. The files are the contract; run with
// SPINSIEVE_RECORD=1 in the environment to write them anew after a change that is meant, and read
// the difference line by line.

#include <cmath>
#include <cstdlib>
#include <fstream>
#include <sstream>
#include <string>
#include <vector>

#include <gtest/gtest.h>
#include <nlohmann/json.hpp>

#include "program.hpp"

namespace spinsieve {
namespace {

const std::filesystem::path source = SPINSIEVE_SOURCE_DIR;

bool recording() { return std::getenv("SPINSIEVE_RECORD") != nullptr; }

struct Recording {
  const char* command;
  const char* file;
};

// Text: the command stands in the first line of the file.
constexpr Recording texts[] = {
    {"--help", "help.txt"},
    {"rank --help", "help_rank.txt"},
    {"modes tests/cli/jobs/group_only.yaml", "wavevector_types.txt"},
    {"modes tests/cli/jobs/monoclinic.yaml", "modes.txt"},
    {"modes tests/cli/jobs/triangular.yaml --phase minus", "modes_minus.txt"},
    {"modes tests/cli/jobs/triangular.yaml --ascii", "modes_ascii.txt"},
    {"enumerate tests/cli/jobs/monoclinic.yaml", "enumerate.txt"},
    {"enumerate tests/cli/jobs/modulated.yaml", "enumerate_modulated.txt"},
    {"peaks tests/cli/jobs/triangular.yaml", "peaks.txt"},
    {"peaks tests/cli/jobs/monoclinic.yaml --candidate 1a", "peaks_fitted.txt"},
    {"rank tests/cli/jobs/monoclinic.yaml", "rank.txt"},
    {"locate tests/cli/jobs/positions.yaml", "locate.txt"},
};

constexpr Recording documents[] = {
    {"modes tests/cli/jobs/group_only.yaml --json", "wavevector_types.json"},
    {"modes tests/cli/jobs/triangular.yaml --json", "modes.json"},
    {"enumerate tests/cli/jobs/monoclinic.yaml --json", "enumerate.json"},
    {"enumerate tests/cli/jobs/modulated.yaml --json", "enumerate_modulated.json"},
    {"peaks tests/cli/jobs/monoclinic.yaml --candidate 1a --set u=4 --json", "peaks.json"},
    {"rank tests/cli/jobs/monoclinic.yaml --json", "rank.json"},
    {"locate tests/cli/jobs/positions.yaml --json", "locate.json"},
};

/// The first difference as a path, empty when there is none; numbers agree to 1e-6.
std::string difference(const nlohmann::json& a, const nlohmann::json& b, const std::string& path) {
  if (a.is_number() && b.is_number()) {
    const double x = a.get<double>();
    const double y = b.get<double>();
    if (std::abs(x - y) <= 1e-6 * std::max({1.0, std::abs(x), std::abs(y)})) return {};
    return path + ": " + a.dump() + " and " + b.dump();
  }
  if (a.type() != b.type()) return path + ": " + a.dump() + " and " + b.dump();
  if (a.is_array()) {
    if (a.size() != b.size()) return path + ": lengths differ";
    for (std::size_t i = 0; i < a.size(); ++i)
      if (auto found = difference(a[i], b[i], path + "[" + std::to_string(i) + "]"); !found.empty())
        return found;
    return {};
  }
  if (a.is_object()) {
    for (const auto& [key, value] : a.items())
      if (!b.contains(key)) return path + "." + key + ": missing";
    for (const auto& [key, value] : b.items()) {
      if (!a.contains(key)) return path + "." + key + ": new";
      if (auto found = difference(a[key], value, path + "." + key); !found.empty()) return found;
    }
    return {};
  }
  return a == b ? std::string() : path + ": " + a.dump() + " and " + b.dump();
}

TEST(RecordingsTest, TextsAreWhatTheyWere) {
  for (const Recording& recording_of : texts) {
    SCOPED_TRACE(recording_of.command);
    const std::filesystem::path file = source / "tests/cli/recordings" / recording_of.file;
    const Outcome run = run_program(words_of(recording_of.command));
    EXPECT_EQ(run.exit_code, 0) << run.errors;
    const std::string text = std::string("$ spinsieve ") + recording_of.command + "\n" + run.output;
    if (recording()) {
      std::filesystem::create_directories(file.parent_path());
      std::ofstream(file, std::ios::binary) << text;
    }
    EXPECT_EQ(text, file_text(file));
  }
}

TEST(RecordingsTest, DocumentsAreWhatTheyWere) {
  for (const Recording& recording_of : documents) {
    SCOPED_TRACE(recording_of.command);
    const std::filesystem::path file = source / "tests/cli" / recording_of.file;
    const Outcome run = run_program(words_of(recording_of.command));
    EXPECT_EQ(run.exit_code, 0) << run.errors;
    if (recording()) std::ofstream(file, std::ios::binary) << run.output;
    EXPECT_EQ(difference(nlohmann::json::parse(file_text(file)), nlohmann::json::parse(run.output),
                         "document"),
              "");
  }
}

TEST(RecordingsTest, TheComparisonSeesWhatChanged) {
  const auto parse = [](const char* text) { return nlohmann::json::parse(text); };
  EXPECT_EQ(difference(parse("[1.0, 2]"), parse("[1.0000000001, 2]"), "d"), "");
  EXPECT_EQ(difference(parse("[1.0, 2]"), parse("[1.001, 2]"), "d"), "d[0]: 1.0 and 1.001");
  EXPECT_EQ(difference(parse("{\"a\": 1}"), parse("{\"b\": 1}"), "d"), "d.a: missing");
  EXPECT_EQ(difference(parse("{}"), parse("{\"b\": 1}"), "d"), "d.b: new");
  EXPECT_EQ(difference(parse("[1]"), parse("[1, 1]"), "d"), "d: lengths differ");
  EXPECT_EQ(difference(parse("null"), parse("0"), "d"), "d: null and 0");
}

TEST(RecordingsTest, NoLineOfTextIsWiderThanThePage) {
  for (const Recording& recording_of : texts) {
    std::istringstream lines(file_text(source / "tests/cli/recordings" / recording_of.file));
    std::string line;
    while (std::getline(lines, line)) {
      const auto letters = std::ranges::count_if(
          line, [](char c) { return (static_cast<unsigned char>(c) & 0xC0U) != 0x80U; });
      EXPECT_LE(letters, 100) << recording_of.file << ": " << line;
    }
  }
}

/// The blocks of a guide that start with "$ build/spinsieve …" are recordings too.
void expect_transcripts(const std::filesystem::path& guide) {
  std::istringstream lines(file_text(guide));
  std::string line;
  std::string command;
  std::string expected;
  std::size_t blocks = 0;
  const auto check = [&] {
    if (command.empty()) return;
    SCOPED_TRACE(command);
    ++blocks;
    while (expected.ends_with("\n\n")) expected.pop_back();
    const Outcome run = run_program(words_of(command));
    std::string output = run.output + run.errors;
    // "…" on a line of its own stands for lines left out.
    std::size_t position = 0;
    for (std::size_t start = 0; start <= expected.size();) {
      const std::size_t cut = expected.find("…\n", start);
      const std::string part = expected.substr(start, cut - start);
      const std::size_t found = output.find(part, position);
      ASSERT_NE(found, std::string::npos) << "not found in order:\n" << part << "\nin\n" << output;
      if (start == 0) {
        ASSERT_EQ(found, 0U) << output;
      }
      position = found + part.size();
      if (cut == std::string::npos) {
        ASSERT_EQ(position, output.size()) << output;
        break;
      }
      start = cut + std::string("…\n").size();
      if (start == expected.size()) break;
    }
    command.clear();
    expected.clear();
  };
  const std::string prompt = "    $ build/spinsieve ";
  while (std::getline(lines, line)) {
    if (line.starts_with(prompt)) {
      check();
      command = line.substr(prompt.size());
    } else if (!command.empty()) {
      if (line.empty())
        expected += "\n";
      else if (line.starts_with("    "))
        expected += line.substr(4) + "\n";
      else
        check();
    }
  }
  check();
  EXPECT_GT(blocks, 0U) << guide;
}

TEST(RecordingsTest, TheReadmeShowsRealOutput) { expect_transcripts(source / "README.md"); }

TEST(RecordingsTest, TheExampleShowsRealOutput) {
  expect_transcripts(source / "examples/layered-oxide/README.md");
}

}  // namespace
}  // namespace spinsieve
