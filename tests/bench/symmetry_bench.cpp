// Small irreps and strata of all space groups, on one core.
//
// The list: every symmetry point of every group in its standard setting, as strata() names it.
// GapBesideTheLibrary needs gap (Debian: gap-core) and takes a minute;
// --benchmark_filter=-Gap leaves it out.

#include <array>
#include <cstdio>
#include <cstdlib>
#include <ctime>
#include <filesystem>
#include <fstream>
#include <memory>
#include <string>
#include <vector>

#include <benchmark/benchmark.h>
#include <sys/resource.h>

#include "../outside/gap_cases.hpp"
#include "symmetry/small_irrep.hpp"
#include "symmetry/strata.hpp"

namespace {

using namespace spinsieve;
using Tables = std::shared_ptr<const SymmetryTables>;

struct Entry {
  int number = 0;
  std::vector<Wavevector> points;
};

const std::vector<Entry>& all_points() {
  static const std::vector<Entry> list = [] {
    std::vector<Entry> result;
    for (int number = 1; number <= 230; ++number) {
      Entry entry{number, {}};
      for (const Stratum& s : strata(SymmetryTables(SpaceGroup::from_number(number))))
        if (s.kind == StratumKind::point) entry.points.push_back(s.k);
      result.push_back(std::move(entry));
    }
    return result;
  }();
  return list;
}

long peak_kilobytes() {
  rusage usage{};
  getrusage(RUSAGE_SELF, &usage);
  return usage.ru_maxrss;
}

/// Group from its tabulated operations, tables, and all irreps with matrices, characters, reality.
void AllGroupsAllPoints(benchmark::State& state) {
  all_points();
  std::size_t pairs = 0;
  std::size_t irreps = 0;
  for (auto _ : state) {
    pairs = irreps = 0;
    for (const Entry& entry : all_points()) {
      const auto tables =
          std::make_shared<const SymmetryTables>(SpaceGroup::from_number(entry.number));
      for (const Wavevector& k : entry.points) {
        irreps += small_irreps(LittleGroup(tables, k)).size();
        ++pairs;
      }
    }
    benchmark::DoNotOptimize(irreps);
  }
  state.counters["pairs"] = static_cast<double>(pairs);
  state.counters["irreps"] = static_cast<double>(irreps);
  state.counters["peak_kB"] = static_cast<double>(peak_kilobytes());
}
BENCHMARK(AllGroupsAllPoints)->Unit(benchmark::kMillisecond);

/// The same without the groups, which one job sets up once.
void AllPointsAfterSetUp(benchmark::State& state) {
  std::vector<Tables> tables;
  for (const Entry& entry : all_points())
    tables.push_back(std::make_shared<const SymmetryTables>(SpaceGroup::from_number(entry.number)));
  for (auto _ : state)
    for (std::size_t n = 0; n < tables.size(); ++n)
      for (const Wavevector& k : all_points()[n].points)
        benchmark::DoNotOptimize(small_irreps(LittleGroup(tables[n], k)));
}
BENCHMARK(AllPointsAfterSetUp)->Unit(benchmark::kMillisecond);

void GroupsAlone(benchmark::State& state) {
  for (auto _ : state)
    for (int number = 1; number <= 230; ++number)
      benchmark::DoNotOptimize(SymmetryTables(SpaceGroup::from_number(number)));
}
BENCHMARK(GroupsAlone)->Unit(benchmark::kMillisecond);

void StrataOfAllGroups(benchmark::State& state) {
  std::vector<Tables> tables;
  for (int number = 1; number <= 230; ++number)
    tables.push_back(std::make_shared<const SymmetryTables>(SpaceGroup::from_number(number)));
  for (auto _ : state)
    for (const Tables& t : tables) benchmark::DoNotOptimize(strata(*t));
}
BENCHMARK(StrataOfAllGroups)->Unit(benchmark::kMillisecond);

/// One group, one k: typical, largest monomial and largest dense cases.
void OneWavevector(benchmark::State& state, int number, const char* a, const char* b,
                   const char* c) {
  const auto tables = std::make_shared<const SymmetryTables>(SpaceGroup::from_number(number));
  Wavevector k;
  parse_component(a, 0, k);
  parse_component(b, 1, k);
  parse_component(c, 2, k);
  for (auto _ : state) benchmark::DoNotOptimize(small_irreps(LittleGroup(tables, k)));
}
BENCHMARK_CAPTURE(OneWavevector, Pnma_Gamma, 62, "0", "0", "0");
BENCHMARK_CAPTURE(OneWavevector, Pnma_R, 62, "1/2", "1/2", "1/2");
BENCHMARK_CAPTURE(OneWavevector, Pnma_line, 62, "0", "u", "0");
BENCHMARK_CAPTURE(OneWavevector, P63mmc_A, 194, "0", "0", "1/2");
BENCHMARK_CAPTURE(OneWavevector, Fm3m_Gamma, 225, "0", "0", "0");
BENCHMARK_CAPTURE(OneWavevector, Fd3m_W, 227, "1/2", "0", "1");
BENCHMARK_CAPTURE(OneWavevector, Ia3d_H, 230, "0", "0", "1");
BENCHMARK_CAPTURE(OneWavevector, Ia3d_P, 230, "1/2", "1/2", "1/2");

void OneWavevectorFromNothing(benchmark::State& state) {
  for (auto _ : state)
    benchmark::DoNotOptimize(small_irreps(
        LittleGroup(std::make_shared<const SymmetryTables>(SpaceGroup::from_number(225)),
                    Wavevector({Fraction(1, 2), Fraction(1, 2), Fraction(1, 2)}))));
}
BENCHMARK(OneWavevectorFromNothing);

void OneReversal(benchmark::State& state) {
  const LittleGroup g(std::make_shared<const SymmetryTables>(SpaceGroup::from_number(225)),
                      Wavevector());
  const std::vector<SmallIrrep> irreps = small_irreps(g);
  for (auto _ : state) benchmark::DoNotOptimize(reversal(g, irreps.back()));
}
BENCHMARK(OneReversal);

/// GAP beside the library, on the same list. GAP counts the irreducible characters of each finite
/// group G_k modulo its kernel, as its own Runtime() around Irr, without start-up, reading,
/// building the group from matrices or comparing. The library counts groups from their tabulated
/// operations, little groups, matrices, characters and realities. GAP also finds the irreps of that
/// finite group that belong to multiples of k, which nobody asks for here, and gives no matrices.
void GapBesideTheLibrary(benchmark::State& state) {
  const auto own_seconds = [] {
    const std::clock_t start = std::clock();  // Processor time, as GAP's Runtime().
    constexpr int rounds = 5;
    for (int i = 0; i < rounds; ++i) {
      for (const Entry& entry : all_points()) {
        const auto tables =
            std::make_shared<const SymmetryTables>(SpaceGroup::from_number(entry.number));
        for (const Wavevector& k : entry.points)
          benchmark::DoNotOptimize(small_irreps(LittleGroup(tables, k)));
      }
    }
    return static_cast<double>(std::clock() - start) / CLOCKS_PER_SEC / rounds;
  }();
  const std::filesystem::path path =
      std::filesystem::temp_directory_path() / "spinsieve_symmetry_bench.g";
  {
    std::ofstream file(path);
    GapCases cases(file);
    for (const Entry& entry : all_points()) {
      const auto tables =
          std::make_shared<const SymmetryTables>(SpaceGroup::from_number(entry.number));
      for (const Wavevector& k : entry.points) cases.add(LittleGroup(tables, k));
    }
  }
  const std::string command = "gap -q --nointeract " + path.string() + " " + SPINSIEVE_SOURCE_DIR +
                              "/tests/outside/compare_characters.g < /dev/null";
  for (auto _ : state) {
    std::string output;
    if (FILE* pipe = popen(command.c_str(), "r")) {
      std::array<char, 256> part{};
      while (fgets(part.data(), part.size(), pipe) != nullptr) output += part.data();
      pclose(pipe);
    }
    const std::size_t spent = output.find("GAP spent ");
    if (spent == std::string::npos || output.find("VERDICT all ") == std::string::npos) {
      state.SkipWithError("gap is missing or does not agree");
      break;
    }
    const double gap_seconds = std::strtod(output.c_str() + spent + 10, nullptr) / 1000;
    state.SetIterationTime(gap_seconds);
    state.counters["library_ms"] = own_seconds * 1000;
    state.counters["gap_over_library"] = gap_seconds / own_seconds;
  }
  std::filesystem::remove(path);
}
BENCHMARK(GapBesideTheLibrary)->UseManualTime()->Iterations(1)->Unit(benchmark::kMillisecond);

}  // namespace
