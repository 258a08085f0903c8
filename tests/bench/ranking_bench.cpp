#include <algorithm>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <thread>
#include <vector>

#include <benchmark/benchmark.h>

#include "ranking/random_draws.hpp"
#include "ranking/ranking.hpp"

// A ranking of many candidates: fits, bounds and ties. The plain way beside it minimises the same
// χ² from the full list of forms without reduction, and must agree before anything is timed.

namespace spinsieve {
namespace {

/// Two threads that take every other body.
class TwoThreads : public Executor {
 public:
  void for_each(std::size_t count, const std::function<void(std::size_t)>& body) override {
    std::thread other([&] {
      for (std::size_t i = 1; i < count; i += 2) body(i);
    });
    for (std::size_t i = 0; i < count; i += 2) body(i);
    other.join();
  }
};

struct Case {
  FitData data;
  std::vector<CandidateModel> candidates;
};

/// Powder-like forms: each line sums the squares of a few components.
Case make_case(std::size_t candidates, std::size_t points, Eigen::Index most_parameters) {
  RandomDraws random(71);
  Case result;
  for (std::size_t i = 0; i < candidates; ++i) {
    const Eigen::Index n = 1 + static_cast<Eigen::Index>(i) % most_parameters;
    std::vector<Eigen::MatrixXd> forms;
    for (std::size_t s = 0; s < points; ++s) {
      Eigen::MatrixXd half(n, 3);
      for (double& entry : half.reshaped()) entry = random.normal();
      forms.emplace_back(half * half.transpose());
    }
    CandidateModel model;
    model.forms = FormFamily(static_cast<std::size_t>(n), forms);
    result.candidates.push_back(std::move(model));
  }
  const FormFamily& truth = result.candidates[1].forms;
  const Eigen::VectorXd exact = truth.intensities(random.normal_vector(truth.parameters()));
  std::vector<MeasuredPoint> list(points);
  for (std::size_t s = 0; s < points; ++s) {
    list[s].sigma = 0.03 * exact(static_cast<Eigen::Index>(s)) + 0.003 * exact.maxCoeff();
    list[s].observed = exact(static_cast<Eigen::Index>(s)) + list[s].sigma * random.normal();
  }
  result.data = FitData(std::move(list));
  return result;
}

/// Gauss–Newton with damping on all lines, from one start.
double plain_minimum(const FitData& data, const FormFamily& forms, Eigen::VectorXd c) {
  double damping = 1e-3;
  double value = chi_squared(data, forms, c, {1.0});
  for (int iteration = 0; iteration < 200; ++iteration) {
    Eigen::MatrixXd jacobian = forms.jacobian(c);
    Eigen::VectorXd residual = forms.intensities(c) - data.observed();
    for (Eigen::Index s = 0; s < residual.size(); ++s) {
      jacobian.row(s) /= data.points()[static_cast<std::size_t>(s)].sigma;
      residual(s) /= data.points()[static_cast<std::size_t>(s)].sigma;
    }
    Eigen::MatrixXd normal = jacobian.transpose() * jacobian;
    normal.diagonal() *= 1 + damping;
    const Eigen::VectorXd next = c - normal.ldlt().solve(jacobian.transpose() * residual);
    const double after = chi_squared(data, forms, next, {1.0});
    damping *= after < value ? 0.1 : 10;
    if (!(after < value)) {
      if (damping > 1e12) break;
      continue;
    }
    const bool done = value - after < 1e-12 * (1 + value);
    c = next;
    value = after;
    if (done) break;
  }
  return value;
}

void rank_all(benchmark::State& state) {
  const Case c = make_case(static_cast<std::size_t>(state.range(0)),
                           static_cast<std::size_t>(state.range(1)), 6);
  TwoThreads executor;
  RankingOptions options;
  std::size_t excluded = 0;
  for (auto _ : state) {
    const Ranking result = ranking(c.data, c.candidates, options, executor);
    excluded = static_cast<std::size_t>(
        std::ranges::count(result.candidates, Verdict::excluded, &RankedCandidate::verdict));
    benchmark::DoNotOptimize(result);
  }
  state.counters["excluded"] = static_cast<double>(excluded);
}
BENCHMARK(rank_all)
    ->Args({100, 14})
    ->Args({1000, 20})
    ->Args({1000, 200})
    ->Unit(benchmark::kMillisecond)
    ->UseRealTime();

void one_fit(benchmark::State& state) {
  const Case c = make_case(6, static_cast<std::size_t>(state.range(0)), 6);
  for (auto _ : state) {
    const Fit result = fit(c.data, c.candidates[5]);
    benchmark::DoNotOptimize(result);
  }
}
BENCHMARK(one_fit)->Arg(14)->Arg(200)->Unit(benchmark::kMicrosecond);

void one_fit_plain(benchmark::State& state) {
  const Case c = make_case(6, static_cast<std::size_t>(state.range(0)), 6);
  const FormFamily& forms = c.candidates[5].forms;
  const Fit reference = fit(c.data, c.candidates[5]);
  const auto search = [&] {
    RandomDraws random(72);
    double best = HUGE_VAL;
    for (std::size_t start = 0; start < reference.starts; ++start)
      best = std::min(best, plain_minimum(c.data, forms, random.normal_vector(6)));
    return best;
  };
  if (std::abs(search() - reference.chi2) > 1e-5 * (1 + reference.chi2)) {
    state.SkipWithError("the plain search found another minimum");
    return;
  }
  for (auto _ : state) benchmark::DoNotOptimize(search());
}
BENCHMARK(one_fit_plain)->Arg(14)->Arg(200)->Unit(benchmark::kMicrosecond);

void one_bound(benchmark::State& state) {
  const Case c = make_case(6, 200, 6);
  const CandidateModel& model = c.candidates[static_cast<std::size_t>(state.range(0)) - 1];
  for (auto _ : state) {
    const Bound result = lower_bound(c.data, model);
    benchmark::DoNotOptimize(result);
  }
}
BENCHMARK(one_bound)->DenseRange(1, 6)->Unit(benchmark::kMicrosecond);

}  // namespace
}  // namespace spinsieve
