// Where results go: files, standard output, threads, standard input.

#include <fstream>
#include <string>

#include <gmock/gmock.h>
#include <gtest/gtest.h>
#include <sys/stat.h>

#include "program.hpp"

namespace spinsieve {
namespace {

using ::testing::ElementsAre;
using ::testing::HasSubstr;
using ::testing::IsEmpty;

const std::string jobs = SPINSIEVE_SOURCE_DIR "/tests/cli/jobs/";
const std::string job = jobs + "monoclinic.yaml";

/// A job that the command has something to do for.
std::string job_for(const std::string& command) {
  return command == "locate" ? jobs + "positions.yaml" : job;
}

TEST(OutputTest, AFileHoldsWhatStandardOutputWould) {
  const ScratchFolder folder;
  const std::string file = (folder.path() / "rank.txt").string();
  const Outcome to_file = run_program({"rank", job, "--out", file});
  EXPECT_EQ(to_file.exit_code, 0) << to_file.errors;
  EXPECT_THAT(to_file.output, IsEmpty());
  EXPECT_EQ(file_text(file), run_program({"rank", job}).output);
  EXPECT_THAT(folder.entries(), ElementsAre("rank.txt"));  // No temporary file stays.
}

TEST(OutputTest, AFileIsOverwrittenOnlyWhenForced) {
  const ScratchFolder folder;
  const std::string file = (folder.path() / "modes.txt").string();
  std::ofstream(file) << "precious";
  const Outcome refused = run_program({"modes", job, "--out", file});
  EXPECT_EQ(refused.exit_code, 2);
  EXPECT_EQ(refused.errors, "spinsieve: error: '" + file + "' exists; --force overwrites it\n");
  EXPECT_EQ(file_text(file), "precious");
  const Outcome forced = run_program({"modes", job, "--out", file, "--force"});
  EXPECT_EQ(forced.exit_code, 0) << forced.errors;
  EXPECT_THAT(file_text(file), HasSubstr("Small irreps"));
  EXPECT_THAT(folder.entries(), ElementsAre("modes.txt"));
}

TEST(OutputTest, AFaultLeavesNoFile) {
  const ScratchFolder folder;
  const std::string file = (folder.path() / "rank.txt").string();
  EXPECT_EQ(run_program({"rank", "missing.yaml", "--out", file}).exit_code, 2);
  EXPECT_THAT(folder.entries(), IsEmpty());
}

TEST(OutputTest, AFileThatCannotBeWrittenIsAnError) {
  const ScratchFolder folder;
  const std::string inside = (folder.path() / "missing" / "rank.txt").string();
  const Outcome run = run_program({"modes", job, "--out", inside});
  EXPECT_EQ(run.exit_code, 2);
  EXPECT_THAT(run.errors, HasSubstr("cannot write into the folder"));
  const Outcome folder_itself = run_program({"modes", job, "--out", folder.path().string()});
  EXPECT_EQ(folder_itself.exit_code, 2);
  EXPECT_THAT(folder_itself.errors, HasSubstr("is a folder; a file is accepted"));
}

TEST(OutputTest, ADeviceIsWrittenToAndNotReplaced) {
  // Renaming a finished file onto a device would have replaced the device.
  const Outcome full = run_program({"modes", job, "--out", "/dev/full", "--force"});
  EXPECT_EQ(full.exit_code, 2);
  EXPECT_THAT(full.errors, HasSubstr("No space left on device"));
  struct stat state {};
  ASSERT_EQ(::stat("/dev/full", &state), 0);
  EXPECT_TRUE(S_ISCHR(state.st_mode));
}

TEST(OutputTest, ALinkKeepsPointingToItsFile) {
  const ScratchFolder folder;
  std::ofstream(folder.path() / "real.txt") << "old";
  std::filesystem::create_symlink("real.txt", folder.path() / "link.txt");
  const Outcome run =
      run_program({"modes", job, "--out", (folder.path() / "link.txt").string(), "--force"});
  EXPECT_EQ(run.exit_code, 0) << run.errors;
  EXPECT_TRUE(std::filesystem::is_symlink(folder.path() / "link.txt"));
  EXPECT_THAT(file_text(folder.path() / "real.txt"), HasSubstr("Small irreps"));
}

TEST(OutputTest, ThreadsChangeNoByte) {
  for (const char* command : {"enumerate", "rank", "locate"}) {
    SCOPED_TRACE(command);
    const Outcome one = run_program({command, job_for(command), "--threads", "1", "--json"});
    EXPECT_EQ(one.exit_code, 0) << one.errors;
    EXPECT_EQ(one.output,
              run_program({command, job_for(command), "--threads", "2", "--json"}).output);
    EXPECT_EQ(one.output,
              run_program({command, job_for(command), "--threads", "5", "--json"}).output);
  }
}

TEST(OutputTest, TheLocaleAndColourVariablesChangeNoByte) {
  const Outcome plain = run_program({"rank", job});
  RunOptions options;
  options.environment = {"LC_ALL=de_DE.UTF-8", "LANG=de_DE.UTF-8", "NO_COLOR=1", "TERM=dumb"};
  EXPECT_EQ(run_program({"rank", job}, options).output, plain.output);
}

TEST(OutputTest, AsciiOutputIsAscii) {
  for (const char* command : {"modes", "enumerate", "rank", "locate"})
    for (const char* form : {"text", "json"}) {
      SCOPED_TRACE(std::string(command) + " " + form);
      const Outcome run = run_program({command, job_for(command), "--ascii", "--format", form});
      EXPECT_EQ(run.exit_code, 0) << run.errors;
      EXPECT_TRUE(std::ranges::all_of(
          run.output, [](char c) { return static_cast<unsigned char>(c) < 0x80U; }));
      EXPECT_EQ(run.output.find('?'), std::string::npos);  // Every letter has a plain form.
    }
}

TEST(OutputTest, AJobMayComeFromStandardInput) {
  RunOptions options;
  options.input = file_text(job);
  const Outcome run = run_program({"rank", "-"}, options);
  EXPECT_EQ(run.exit_code, 0) << run.errors;
  // The name of the job stands in the first lines alone.
  const auto result = [](const std::string& text) { return text.substr(text.find("Wavevector")); };
  EXPECT_THAT(run.output, HasSubstr("<stdin>:4:16: "));
  EXPECT_EQ(result(run.output), result(run_program({"rank", job}).output));
  options.input = "spinsieve: 1\ncrystall: 1\n";
  const Outcome wrong = run_program({"rank", "-"}, options);
  EXPECT_EQ(wrong.exit_code, 2);
  EXPECT_THAT(wrong.errors, ::testing::StartsWith("<stdin>:2:1: error: "));
}

TEST(OutputTest, AReaderThatLeavesEndsTheWorkWithoutAFault) {
  RunOptions options;
  options.reader_closes = true;
  const Outcome run = run_program({"rank", job, "--json"}, options);
  EXPECT_EQ(run.exit_code, 0);
  EXPECT_THAT(run.errors, IsEmpty());
}

TEST(OutputTest, NothingButWarningsAppearsOnStandardErrorWithoutATerminal) {
  EXPECT_THAT(run_program({"rank", job}).errors, IsEmpty());
}

}  // namespace
}  // namespace spinsieve
