// Whole processes, as a person starts them: wall time of a command and its largest memory.

#include <cstdio>
#include <filesystem>
#include <string>
#include <vector>

#include <benchmark/benchmark.h>
#include <fcntl.h>
#include <sys/resource.h>
#include <sys/wait.h>
#include <unistd.h>

namespace {

struct Finished {
  int code = -1;
  double megabytes = 0;
};

Finished run(const std::vector<std::string>& arguments) {
  std::vector<char*> argv;
  for (const std::string& argument : arguments) argv.push_back(const_cast<char*>(argument.c_str()));
  argv.push_back(nullptr);
  const pid_t child = fork();
  if (child == 0) {
    const int nowhere = open("/dev/null", O_WRONLY);
    dup2(nowhere, STDOUT_FILENO);
    execv(argv[0], argv.data());
    _exit(127);
  }
  int status = 0;
  rusage usage{};
  wait4(child, &status, 0, &usage);
  return {WIFEXITED(status) ? WEXITSTATUS(status) : -1,
          static_cast<double>(usage.ru_maxrss) / 1024};
}

void measure(benchmark::State& state, const std::vector<std::string>& arguments) {
  Finished last;
  for (auto _ : state) {
    last = run(arguments);
    if (last.code != 0) state.SkipWithError("the command failed");
  }
  state.counters["MB"] = last.megabytes;
}

/// A job of one space group, in a file of its own.
std::string job_of_group(const std::string& group, const std::string& more) {
  const std::string path =
      (std::filesystem::temp_directory_path() / ("spinsieve-bench-" + group + ".yaml")).string();
  if (std::FILE* file = std::fopen(path.c_str(), "w")) {
    std::fprintf(file, "spinsieve: 1\ncrystal: {space_group: %s}\n%s", group.c_str(), more.c_str());
    std::fclose(file);
  }
  return path;
}

void rank_the_example(benchmark::State& state) {
  measure(state, {SPINSIEVE_PROGRAM_FILE, "rank",
                  SPINSIEVE_SOURCE_DIR "/examples/layered-oxide/job.yaml"});
}
BENCHMARK(rank_the_example)->Unit(benchmark::kMillisecond)->UseRealTime();

void types_of_wavevector(benchmark::State& state) {
  measure(state,
          {SPINSIEVE_PROGRAM_FILE, "modes", job_of_group(std::to_string(state.range(0)), "")});
}
BENCHMARK(types_of_wavevector)
    ->Arg(62)
    ->Arg(227)
    ->Arg(230)
    ->Unit(benchmark::kMillisecond)
    ->UseRealTime();

void irreps_at_a_point(benchmark::State& state) {
  measure(state,
          {SPINSIEVE_PROGRAM_FILE, "modes",
           job_of_group(std::to_string(state.range(0)), "propagation: [[1/2, 1/2, 1/2]]\n")});
}
BENCHMARK(irreps_at_a_point)
    ->Arg(62)
    ->Arg(227)
    ->Arg(230)
    ->Unit(benchmark::kMillisecond)
    ->UseRealTime();

}  // namespace
