// The call itself: options, exit codes, what goes to which stream.

#include <string>
#include <vector>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "program.hpp"

namespace spinsieve {
namespace {

using ::testing::HasSubstr;
using ::testing::IsEmpty;
using ::testing::StartsWith;

TEST(CallTest, HelpAndVersionAreAnswersOnStandardOutput) {
  for (const char* option : {"--help", "-h", "--version"}) {
    const Outcome run = run_program({option});
    EXPECT_EQ(run.exit_code, 0);
    EXPECT_THAT(run.output, HasSubstr("spinsieve"));
    EXPECT_THAT(run.errors, IsEmpty());
  }
}

TEST(CallTest, WrongCallsSayWhatIsAccepted) {
  const struct {
    std::vector<std::string> arguments;
    const char* message;
  } cases[] = {
      {{}, "spinsieve: error: no command is given; spinsieve --help lists what is accepted\n"},
      {{"rnak", "job.yaml"}, "spinsieve: error: unknown command 'rnak'; did you mean rank?\n"},
      {{"paint", "job.yaml"},
       "spinsieve: error: unknown command 'paint'; spinsieve --help lists what is accepted\n"},
      {{"--thread", "2"}, "spinsieve: error: unknown option '--thread'; did you mean --threads?\n"},
      {{"rank", "job.yaml", "--out"},
       "spinsieve: error: --out needs a value; spinsieve --help lists what is accepted\n"},
      {{"rank"},
       "spinsieve: error: no job is given; spinsieve rank JOB.yaml is accepted, and - for standard "
       "input\n"},
      {{"rank", "a.yaml", "b.yaml"},
       "spinsieve: error: unexpected argument 'b.yaml'; one job is accepted\n"},
      {{"rank", "a.yaml", "--threads", "0"},
       "spinsieve: error: --threads '0' is not a whole number from 1 to 1024\n"},
      {{"rank", "a.yaml", "--threads", "two"},
       "spinsieve: error: --threads 'two' is not a whole number from 1 to 1024\n"},
      {{"rank", "a.yaml", "--threads", "1", "--threads", "2"},
       "spinsieve: error: --threads is given twice; once is accepted\n"},
      {{"rank", "a.yaml", "--seed", "-1"},
       "spinsieve: error: --seed '-1' is not a whole number, 0 or more\n"},
      {{"rank", "a.yaml", "--phase", "both"},
       "spinsieve: error: --phase 'both' is not known; plus and minus are accepted\n"},
      {{"rank", "a.yaml", "--format", "xml"},
       "spinsieve: error: --format 'xml' is not known; text and json are accepted\n"},
      {{"rank", "a.yaml", "--format", "text", "--json"},
       "spinsieve: error: --json and --format text contradict each other\n"},
      {{"rank", "a.yaml", "--candidate", "3a"},
       "spinsieve: error: the command rank does not take --candidate\n"},
      {{"peaks", "a.yaml", "--candidate", "3a", "--set", "u"},
       "spinsieve: error: --set 'u' is not NAME=VALUE with a number, such as u=3.7\n"},
      {{"peaks", "a.yaml", "--candidate", "3a", "--set", "u=nan"},
       "spinsieve: error: --set 'u=nan' is not NAME=VALUE with a number, such as u=3.7\n"},
  };
  for (const auto& [arguments, message] : cases) {
    const Outcome run = run_program(arguments);
    EXPECT_EQ(run.exit_code, 2) << message;
    EXPECT_EQ(run.errors, message);
    EXPECT_THAT(run.output, IsEmpty());
  }
}

TEST(CallTest, ACommandThatDoesNotWorkYetSaysSo) {
  const Outcome run = run_program({"separate", "job.yaml"});
  EXPECT_EQ(run.exit_code, 2);
  EXPECT_THAT(run.errors, StartsWith("spinsieve: error: the command separate is not available in"));
}

TEST(CallTest, OptionsMayStandBeforeTheCommand) {
  const Outcome run = run_program({"--json", "--threads=2", "rank", "missing.yaml"});
  EXPECT_EQ(run.exit_code, 2);
  EXPECT_THAT(run.errors, HasSubstr("missing.yaml"));
}

TEST(CallTest, AClosedPipeIsNoFault) {
  RunOptions options;
  options.reader_closes = true;
  const Outcome run = run_program({"--help"}, options);
  EXPECT_EQ(run.exit_code, 0);
  EXPECT_THAT(run.errors, IsEmpty());
}

TEST(CallTest, AnInterruptEndsWithItsOwnCodeAndNoFile) {
  const ScratchFolder folder;
  RunOptions options;
  options.folder = folder.path();
  options.interrupted = true;  // While the program waits for the rest of a job.
  options.input = "spinsieve: 1\n";
  const Outcome run = run_program({"rank", "-", "--out", "result.txt"}, options);
  EXPECT_EQ(run.exit_code, 130);
  EXPECT_THAT(run.output, IsEmpty());
  EXPECT_THAT(folder.entries(), IsEmpty());
}

TEST(CallTest, AFullDeviceIsAnError) {
  RunOptions options;
  options.output_file = "/dev/full";
  const Outcome run = run_program({"--help"}, options);
  EXPECT_EQ(run.exit_code, 2);
  EXPECT_EQ(run.errors,
            "spinsieve: error: cannot write standard output: No space left on device\n");
}

}  // namespace
}  // namespace spinsieve
