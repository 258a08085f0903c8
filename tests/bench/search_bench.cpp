// The complete search beside a dense grid of the same resolution: how many distances |τ + k| each
// evaluates for the general interior of an orthorhombic cell of 250 Å³ with 8 lines.

#include <array>
#include <cmath>
#include <stdexcept>

#include <benchmark/benchmark.h>

#include "../search/synthetic.hpp"

namespace spinsieve {
namespace {

const Vector3 true_k = {0.21, 0.33, 0.12};

SearchProblem bench_problem(double relative_tolerance) {
  std::mt19937 random(3);
  return synthetic_problem(Cell(5.9, 7.7, 5.503, 90, 90, 90), parse_space_group("P n m a"), true_k,
                           {.relative_tolerance = relative_tolerance}, random);
}

struct GridCount {
  double distances = 0;  // for the whole grid
  std::vector<Vector3> hits;
};

/// The plain way: at every grid point, line by line, until one line has no satellite. Every
/// `stride`-th point is visited and the count scaled up.
GridCount dense_grid(const SearchProblem& problem, std::size_t stride) {
  double narrowest = 1e9;
  double largest_q = 0;
  for (const SearchLine& line : problem.lines) {
    narrowest = std::min(narrowest, line.tolerance);
    largest_q = std::max(largest_q, line.q + line.tolerance);
  }
  // The spacing at which the search itself stops: a cube whose half diagonal is half a tolerance.
  const double spacing = narrowest / std::sqrt(3.0);
  const Cell& cell = problem.cell;
  const std::array<double, 3> axes = {cell.q({1, 0, 0}), cell.q({0, 1, 0}), cell.q({0, 0, 1})};
  std::array<std::size_t, 3> steps{};
  for (std::size_t i = 0; i < 3; ++i)
    steps[i] = static_cast<std::size_t>(std::ceil(axes[i] / 2 / spacing)) + 1;
  std::vector<Vector3> nodes;
  for (int h = -6; h <= 6; ++h)
    for (int l = -6; l <= 6; ++l)
      for (int m = -6; m <= 6; ++m)
        if (cell.q({std::max(0.0, std::abs(h) - 0.5), std::max(0.0, std::abs(l) - 0.5),
                    std::max(0.0, std::abs(m) - 0.5)}) <= largest_q)
          nodes.push_back({static_cast<double>(h), static_cast<double>(l), static_cast<double>(m)});
  GridCount count;
  double visited = 0;
  const std::size_t total = steps[0] * steps[1] * steps[2];
  for (std::size_t p = 0; p < total; p += stride) {
    ++visited;
    const Vector3 k = {
        0.5 * static_cast<double>(p % steps[0]) / static_cast<double>(steps[0] - 1),
        0.5 * static_cast<double>(p / steps[0] % steps[1]) / static_cast<double>(steps[1] - 1),
        0.5 * static_cast<double>(p / steps[0] / steps[1]) / static_cast<double>(steps[2] - 1)};
    bool all = true;
    for (std::size_t i = 0; i < problem.lines.size() && all; ++i) {
      bool reached = false;
      for (std::size_t n = 0; n < nodes.size() && !reached; ++n) {
        const Vector3 v = {(nodes[n][0] + k[0]) * axes[0], (nodes[n][1] + k[1]) * axes[1],
                           (nodes[n][2] + k[2]) * axes[2]};
        const double q = std::sqrt(v[0] * v[0] + v[1] * v[1] + v[2] * v[2]);
        count.distances += 1;
        reached = std::abs(q - problem.lines[i].q) <= problem.lines[i].tolerance;
      }
      all = reached;
    }
    if (all) count.hits.push_back(k);
  }
  count.distances *= static_cast<double>(total) / visited;
  return count;
}

void general_interior(benchmark::State& state) {
  const double tolerance = static_cast<double>(state.range(0)) * 1e-4;
  const SearchProblem problem = bench_problem(tolerance);
  Executor executor;
  SearchResult result;
  for (auto _ : state) result = locate(problem, executor);
  const auto listed = [&](const Vector3& k) {
    for (const Solution& solution : result.solutions)
      if (class_distance(problem.cell, problem.group, k, solution.vector.k) <=
          solution.reach + 1e-9)
        return true;
    return false;
  };
  // Both agree: the true k, and what the grid finds, are listed.
  const GridCount grid = dense_grid(problem, state.range(0) == 200 ? 1 : 1009);
  if (!listed(true_k) || !result.coverage.complete) throw std::logic_error("the true k was missed");
  for (const Vector3& k : grid.hits)
    if (!listed(k)) throw std::logic_error("a vector of the grid was missed");
  state.counters["search_distances"] = static_cast<double>(result.coverage.kinds.back().distances);
  state.counters["grid_distances"] = grid.distances;
  state.counters["ratio"] =
      grid.distances / static_cast<double>(result.coverage.kinds.back().distances);
}
BENCHMARK(general_interior)->Arg(200)->Arg(50)->Arg(10)->Unit(benchmark::kMillisecond);

void points_and_lines(benchmark::State& state) {
  SearchProblem problem = bench_problem(0.001);
  problem.deepest = StratumKind::line;
  Executor executor;
  for (auto _ : state) benchmark::DoNotOptimize(locate(problem, executor));
}
BENCHMARK(points_and_lines)->Unit(benchmark::kMillisecond);

/// The whole grid at a tolerance wide enough for it.
void plain_dense_grid(benchmark::State& state) {
  const SearchProblem problem = bench_problem(0.02);
  GridCount grid;
  for (auto _ : state) grid = dense_grid(problem, 1);
  if (grid.hits.empty()) throw std::logic_error("the grid found nothing");
  state.counters["hits"] = static_cast<double>(grid.hits.size());
}
BENCHMARK(plain_dense_grid)->Unit(benchmark::kMillisecond)->Iterations(1);

}  // namespace
}  // namespace spinsieve
