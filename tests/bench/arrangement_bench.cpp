// Identification of magnetic groups and bulk properties: what one candidate costs.

#include <vector>

#include <benchmark/benchmark.h>

#include "arrangement/bulk_properties.hpp"
#include "arrangement/magnetic_database.hpp"
#include "arrangement/magnetic_group.hpp"

namespace spinsieve {
namespace {

/// P-1 (monoclinic and triclinic searches are the longest), Pnma, I_c4/mmm, Ia'-3'd'.
constexpr int types[] = {4, 546, 1200, 1651};

void identify(benchmark::State& state) {
  const int uni_number = types[state.range(0)];
  const auto operations = standard_magnetic_operations(uni_number);
  const RationalLattice integers;
  if (MagneticGroup::from_operations(operations, integers.basis()).uni_number() != uni_number)
    state.SkipWithError("wrong group");
  for (auto _ : state)
    benchmark::DoNotOptimize(MagneticGroup::from_operations(operations, integers.basis()));
  state.SetLabel(std::string(magnetic_symbols(uni_number).bns_symbol));
}
BENCHMARK(identify)->DenseRange(0, 3);

void properties(benchmark::State& state) {
  const int uni_number = types[state.range(0)];
  const MagneticPointGroup group(point_operations(standard_magnetic_operations(uni_number)));
  std::vector<IntMatrix> parent;
  for (const auto& operation : group.operations()) parent.push_back(operation.rotation);
  for (auto _ : state) benchmark::DoNotOptimize(bulk_properties(group, parent));
  state.SetLabel(group.symbol());
}
BENCHMARK(properties)->DenseRange(0, 3);

}  // namespace
}  // namespace spinsieve
