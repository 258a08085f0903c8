// Wrong jobs: exit code 2, one located message on standard error, nothing on standard output, no
// file. The exact wording of each message is tested with the reader of jobs.

#include <fstream>
#include <string>
#include <vector>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "program.hpp"

namespace spinsieve {
namespace {

using ::testing::ElementsAre;
using ::testing::HasSubstr;
using ::testing::IsEmpty;
using ::testing::StartsWith;

/// A sound job; each case below puts other lines in place of one.
const std::vector<std::string> sound = {
    "spinsieve: 1",
    "crystal: {space_group: 62, cell: [5.74, 7.69, 5.53, 90, 90, 90]}",
    "magnetic_sites:",
    "  - {label: M1, ion: Mn3+, position: [0, 0, 1/2]}",
    "propagation: [[0, 0, 0]]",
    "measurement:",
    "  sample: powder",
    "  wavelength: 2.41",
    "  lines: [{q: 1.392, intensity: 310, sigma: 9}]",
};

std::string job_with(std::size_t line, const std::string& text) {
  std::string job;
  for (std::size_t i = 0; i < sound.size(); ++i) job += (i + 1 == line ? text : sound[i]) + "\n";
  return job;
}

void expect_located(const std::string& job, const std::string& start, const std::string& part,
                    const char* command = "rank") {
  const ScratchFolder folder;
  std::ofstream(folder.path() / "job.yaml", std::ios::binary) << job;
  RunOptions options;
  options.folder = folder.path();
  const Outcome run = run_program({command, "job.yaml", "--out", "result.txt"}, options);
  EXPECT_EQ(run.exit_code, 2) << run.errors;
  EXPECT_THAT(run.errors, StartsWith(start + " error: "));
  EXPECT_THAT(run.errors, HasSubstr(part));
  EXPECT_EQ(std::ranges::count(run.errors, '\n'), 1) << run.errors;
  EXPECT_THAT(run.output, IsEmpty());
  EXPECT_THAT(folder.entries(), ElementsAre("job.yaml"));
}

TEST(BadInputTest, TheSoundJobIsSound) {
  const ScratchFolder folder;
  std::ofstream(folder.path() / "job.yaml") << job_with(0, "");
  RunOptions options;
  options.folder = folder.path();
  const Outcome run = run_program({"rank", "job.yaml"}, options);
  EXPECT_EQ(run.exit_code, 0) << run.errors;
}

TEST(BadInputTest, WrongJobsAreLocated) {
  const struct {
    std::size_t line;
    const char* text;
    const char* start;
    const char* part;
  } cases[] = {
      {2, "crystal: {space_group: P 6 5 4, cell: [5.74, 7.69, 5.53, 90, 90, 90]}",
       "job.yaml:2:24:", "'P 6 5 4'"},
      {2, "crystal: {space_group: 231, cell: [5.74, 7.69, 5.53, 90, 90, 90]}",
       "job.yaml:2:24:", "231"},
      {2, "crystal: {space_group: 62, cell: [5.74, 7.69, 5.53, 90, 97, 90]}",
       "job.yaml:2:34:", "97"},
      {2, "crystal: {space_group: 62, cell: [.nan, 7.69, 5.53, 90, 90, 90]}",
       "job.yaml:2:35:", "'.nan'"},
      {2, "crystal: {space_group: 62, cell: [5.74, 7.69, 1e999, 90, 90, 90]}",
       "job.yaml:2:47:", "'1e999'"},
      {2, "crystal: {spacegroup: 62, cell: [5.74, 7.69, 5.53, 90, 90, 90]}",
       "job.yaml:2:11:", "the nearest known key is 'space_group'"},
      {4, "  - {label: M1, ion: Mn3+, position: [0, 0]}", "job.yaml:4:38:", "position"},
      {4, "  - {label: M1, ion: Mx3+, position: [0, 0, 1/2]}", "job.yaml:4:22:", "'Mx3+'"},
      {4, "  - {label: M1, ion: Mn3+, position: [0, 0, 1/0]}", "job.yaml:4:45:", "1/0"},
      {4,
       "  - {label: M1, ion: Mn3+, position: [0, 0, 1/2]}\n"
       "  - {label: M1, ion: Mn3+, position: [0, 0, 0]}",
       "job.yaml:5:13:", "M1"},
      {4,
       "  - {label: M1, ion: Mn3+, position: [0, 0, 1/2]}\n"
       "  - {label: M2, ion: Mn3+, position: [1/2, 0, 0]}",
       "job.yaml:5:13:", "M2"},
      {5, "propagation: [[0, half, 0]]", "job.yaml:5:19:", "'half'"},
      {5, "propagation: [[0, 1/0, 0]]", "job.yaml:5:19:", "1/0"},
      {5, "propagation: 7", "job.yaml:5:14:", "7"},
      {9, "  lines: [{q: 1.392, intensity: 310, sigma: -9}]", "job.yaml:9:45:", "'-9'"},
      {9, "  lines: [{q: 1.392, intensity: many, sigma: 9}]", "job.yaml:9:33:", "'many'"},
      {9, "  lines: [{q: 1.392, intensity: 310}]", "job.yaml:9:11:", "sigma"},
      {9, "  lines: missing.csv", "job.yaml:9:10:", "missing.csv"},
      {9, "  lines: [{q: 1.392, intensity: 310, sigma: 9}", "job.yaml:10:1:", "is not closed"},
  };
  for (const auto& [line, text, start, part] : cases) {
    SCOPED_TRACE(text);
    expect_located(job_with(line, text), start, part);
  }
}

TEST(BadInputTest, WhatIsNoJobAtAllIsLocated) {
  expect_located("", "job.yaml:1:1:", "");
  expect_located("\xFF\xFE\x00", "job.yaml:1:1:", "");
  expect_located("just words", "job.yaml:1:1:", "a job is a mapping");
  expect_located("a: &x [*x]\n", "job.yaml:1:4:", "anchors");
}

TEST(BadInputTest, AMissingColumnIsBlamedOnItsFile) {
  const ScratchFolder folder;
  std::ofstream(folder.path() / "job.yaml") << job_with(9, "  lines: lines.csv");
  std::ofstream(folder.path() / "lines.csv") << "q,intensity\n1.392,310\n";
  RunOptions options;
  options.folder = folder.path();
  const Outcome run = run_program({"rank", "job.yaml"}, options);
  EXPECT_EQ(run.exit_code, 2);
  EXPECT_THAT(run.errors, StartsWith("lines.csv:1:"));
  EXPECT_THAT(run.errors, HasSubstr("sigma"));
}

TEST(BadInputTest, PathsInAJobAreRelativeToIt) {
  const ScratchFolder folder;
  std::filesystem::create_directory(folder.path() / "inner");
  std::ofstream(folder.path() / "inner/job.yaml") << job_with(9, "  lines: lines.csv");
  std::ofstream(folder.path() / "inner/lines.csv") << "q,intensity,sigma\n1.392,310,9\n";
  RunOptions options;
  options.folder = folder.path();
  const Outcome run = run_program({"rank", "inner/job.yaml"}, options);
  EXPECT_EQ(run.exit_code, 0) << run.errors;
}

TEST(BadInputTest, WhatACommandNeedsIsNamed) {
  const struct {
    const char* command;
    std::size_t line;
    const char* text;
    const char* start;
    const char* part;
  } cases[] = {
      {"enumerate", 5, "", "job.yaml:1:1:", "enumerate needs a wavevector"},
      {"rank", 5, "propagation: locate", "job.yaml:1:1:", "spinsieve locate finds it"},
      {"enumerate", 5, "propagation: [[0, u, 0]]", "job.yaml:5:15:", "free parameters"},
      {"peaks", 5, "propagation: [[0, 0, 0]]", "job.yaml:1:1:", "peaks needs an arrangement"},
      {"enumerate", 5, "propagation: [[0, 0, 0]]\nsearch: {arms: all}",
       "job.yaml:1:1:", "'arms: all' in search is not acted on yet; accepted is single"},
      {"rank", 5, "propagation: [[0, 0, 0]]\nsearch: {combine: 2}",
       "job.yaml:1:1:", "'combine: 2' in search is not acted on yet; accepted is 1"},
      {"rank", 4, "  - {label: M1, ion: Ti4+, position: [0, 0, 1/2]}", "job.yaml:4:22:", "Ti4+"},
  };
  for (const auto& [command, line, text, start, part] : cases) {
    SCOPED_TRACE(std::string(command) + " " + text);
    expect_located(job_with(line, text), start, part, command);
  }
}

TEST(BadInputTest, AMissingJobIsAnError) {
  const Outcome run = run_program({"rank", "nowhere.yaml"});
  EXPECT_EQ(run.exit_code, 2);
  EXPECT_THAT(run.errors, HasSubstr("nowhere.yaml"));
}

TEST(BadInputTest, ACandidateThatIsNotThereIsNamed) {
  const std::string job = "tests/cli/jobs/monoclinic.yaml";
  const Outcome id = run_program({"peaks", job, "--candidate", "9z"});
  EXPECT_EQ(id.exit_code, 2);
  EXPECT_THAT(id.errors, StartsWith("spinsieve: error: no candidate is called '9z'; 1a"));
  const Outcome name = run_program({"peaks", job, "--candidate", "1a", "--set", "zz=1"});
  EXPECT_EQ(name.exit_code, 2);
  EXPECT_THAT(name.errors, HasSubstr("has no parameter 'zz'; u"));
  const Outcome alone = run_program({"peaks", job, "--set", "u=1"});
  EXPECT_EQ(alone.exit_code, 2);
  EXPECT_THAT(alone.errors, HasSubstr("--set needs --candidate ID"));
}

}  // namespace
}  // namespace spinsieve
