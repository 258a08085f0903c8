// Lines and intensity forms of a large cell: fast path, plain triple loop, and the arithmetic limit
// of the machine. The forms are first checked against one another.
#include <cmath>
#include <complex>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <numbers>
#include <random>

#include <benchmark/benchmark.h>

#include "scattering/intensity_form.hpp"
#include "scattering/structure_factor.hpp"

namespace spinsieve {
namespace {

constexpr std::size_t atoms = 64;

struct Problem {
  Cell cell{12, 13, 14, 90, 95, 90};
  SpaceGroup group = parse_space_group("P 1");
  std::vector<MagneticSite> sites;
  MomentField field;
  ReflectionTable table;
  std::vector<std::size_t> lines;

  /// complex: a pair of satellites per reciprocal-lattice vector, components without centre.
  Problem(std::size_t parameters, std::size_t reflections, const FractionVector& k) {
    std::mt19937 random(1);
    const auto draw = [&random] { return static_cast<double>(random() % 2001) / 1000 - 1; };
    field.parameters = parameters;
    FourierField& arm = field.arms.emplace_back();
    arm.k = k;
    arm.self_conjugate = arm_kind(group, k) != ArmKind::pair;
    for (std::size_t j = 0; j < atoms; ++j) {
      MagneticSite& site = sites.emplace_back();
      site.ion.ion = parse_ion("Mn2+");
      site.displacement.b_iso = 0.5;
      for (Fraction& x : site.site.position)
        x = Fraction(static_cast<std::int64_t>(random() % 997), 997);
      arm.atoms.push_back({j, site.site.position});
    }
    for (std::size_t i = 0; i < parameters * atoms; ++i) {
      FourierField::Component& S = arm.components.emplace_back();
      for (std::complex<double>& entry : S) {
        const double re = draw();
        entry = {re, arm.self_conjugate ? 0 : draw()};
      }
    }
    // |Q| of the sphere that holds about so many reflections, Q and −Q both counted.
    const double satellites = arm.self_conjugate ? 1 : 2;
    const double q = 2 * std::numbers::pi *
                     std::cbrt(static_cast<double>(reflections) / satellites /
                               (4 * std::numbers::pi / 3 * cell.volume()));
    const std::vector<Arm> arms = {{k, 0}};
    table = ReflectionTable(cell, group, arms, 0, q);
    for (std::size_t i = 0; i < table.lines().size(); ++i) lines.push_back(i);
  }
};

/// Every atom, parameter and reflection (both of each pair) with its own complex exponential.
std::vector<Eigen::MatrixXd> plain_forms(const Problem& problem,
                                         const MagneticScatterers& scatterers) {
  const FourierField& field = problem.field.arms.front();
  const Eigen::Index n = static_cast<Eigen::Index>(problem.field.parameters);
  std::vector<Vector3> positions;
  for (const FieldAtom& atom : field.atoms) positions.push_back(to_double(atom.position));
  std::vector<ComplexVector3> components;  // Cartesian, parameter-major
  for (const FourierField::Component& S : field.components) {
    const Vector3 re =
        problem.cell.cartesian_from_crystal_axes({S[0].real(), S[1].real(), S[2].real()});
    const Vector3 im =
        problem.cell.cartesian_from_crystal_axes({S[0].imag(), S[1].imag(), S[2].imag()});
    ComplexVector3& component = components.emplace_back();
    for (std::size_t i = 0; i < 3; ++i) component[i] = {re[i], field.self_conjugate ? 0 : -im[i]};
  }
  std::vector<Eigen::MatrixXd> forms;
  for (const PowderLine& line : problem.table.lines()) {
    Eigen::MatrixXd M = Eigen::MatrixXd::Zero(n, n);
    for (const Reflection& stored : problem.table.reflections(line)) {
      for (const Reflection& r : {stored, problem.table.opposite(stored)}) {
        const Vector3 hkl = reciprocal_components(r, field.k);
        std::vector<ComplexVector3> F(problem.field.parameters);
        std::vector<double> weights(field.atoms.size());
        for (std::size_t j = 0; j < weights.size(); ++j)
          weights[j] = scatterers.weight(field.atoms[j].site, r.q_length);
        for (std::size_t p = 0; p < problem.field.parameters; ++p) {
          for (std::size_t j = 0; j < field.atoms.size(); ++j) {
            const Vector3& x = positions[j];
            const std::complex<double> phase = std::exp(std::complex<double>(
                0, 2 * std::numbers::pi * (hkl[0] * x[0] + hkl[1] * x[1] + hkl[2] * x[2])));
            const ComplexVector3& S = components[p * field.atoms.size() + j];
            for (std::size_t i = 0; i < 3; ++i)
              F[p][i] += weights[j] * phase * (r.k_sign < 0 ? std::conj(S[i]) : S[i]);
          }
          F[p] = perpendicular(F[p], r.q);
        }
        for (Eigen::Index p = 0; p < n; ++p)
          for (Eigen::Index q = 0; q < n; ++q)
            for (std::size_t i = 0; i < 3; ++i)
              M(p, q) += std::real(std::conj(F[static_cast<std::size_t>(p)][i]) *
                                   F[static_cast<std::size_t>(q)][i]);
      }
    }
    forms.push_back(std::move(M));
  }
  return forms;
}

const FractionVector& wavevector(bool complex) {
  static const FractionVector zero{};
  static const FractionVector general{Fraction(1, 7), Fraction(2, 9), 0};
  return complex ? general : zero;
}

std::size_t count(const Problem& problem) {
  std::size_t reflections = 0;
  for (const PowderLine& line : problem.table.lines()) reflections += line.multiplicity;
  return reflections;
}

void report(benchmark::State& state, const Problem& problem) {
  const double triples = static_cast<double>(atoms * problem.field.parameters * count(problem));
  state.counters["reflections"] = static_cast<double>(count(problem));
  state.counters["flop/s"] = benchmark::Counter(
      8 * triples, benchmark::Counter::kIsIterationInvariantRate, benchmark::Counter::kIs1000);
}

void check(const Problem& problem) {
  const MagneticScatterers scatterers(problem.cell, problem.group, problem.sites);
  const auto fast = line_forms(scatterers, problem.field, problem.table, problem.lines);
  const auto plain = plain_forms(problem, scatterers);
  for (std::size_t i = 0; i < fast.size(); ++i)
    if ((fast[i].mu_b2() - plain[i]).norm() > 1e-10 * (1 + plain[i].norm())) {
      std::fputs("fast and plain forms differ\n", stderr);
      std::abort();
    }
}

/// Lines and forms, from the lattice on. Arguments: parameters, reflections, complex.
void fast(benchmark::State& state) {
  const Problem problem(static_cast<std::size_t>(state.range(0)),
                        static_cast<std::size_t>(state.range(1)), wavevector(state.range(2) != 0));
  check(problem);
  const std::vector<Arm> arms = {{problem.field.arms[0].k, 0}};
  const double q_max = problem.table.lines().back().q;
  for (auto _ : state) {
    const ReflectionTable table(problem.cell, problem.group, arms, 0, q_max);
    const MagneticScatterers scatterers(problem.cell, problem.group, problem.sites);
    benchmark::DoNotOptimize(line_forms(scatterers, problem.field, table, problem.lines));
  }
  report(state, problem);
}

/// Forms alone, as for the second and further candidates of one job.
void fast_forms(benchmark::State& state) {
  const Problem problem(static_cast<std::size_t>(state.range(0)),
                        static_cast<std::size_t>(state.range(1)), wavevector(state.range(2) != 0));
  const MagneticScatterers scatterers(problem.cell, problem.group, problem.sites);
  for (auto _ : state)
    benchmark::DoNotOptimize(line_forms(scatterers, problem.field, problem.table, problem.lines));
  report(state, problem);
}

void plain(benchmark::State& state) {
  const Problem problem(static_cast<std::size_t>(state.range(0)),
                        static_cast<std::size_t>(state.range(1)), wavevector(state.range(2) != 0));
  const MagneticScatterers scatterers(problem.cell, problem.group, problem.sites);
  for (auto _ : state) benchmark::DoNotOptimize(plain_forms(problem, scatterers));
  report(state, problem);
}

#if defined(__x86_64__) && !defined(__SANITIZE_ADDRESS__)
#define SPINSIEVE_CLONES \
  __attribute__((target_clones("fma", "default")))  // as the library's kernel
#else
#define SPINSIEVE_CLONES
#endif

constexpr std::size_t chains = 48;

SPINSIEVE_CLONES void multiply_add_rounds(std::array<double, chains>& sums, double factor,
                                          double step, std::size_t rounds) {
  std::array<double, chains> local = sums;
  for (std::size_t r = 0; r < rounds; ++r)
    for (double& sum : local) sum = sum * factor + step;
  sums = local;
}

/// The most the core does with the flags of the kernel: independent multiply-adds in registers.
void multiply_add(benchmark::State& state) {
  constexpr std::size_t rounds = 100'000;
  std::array<double, chains> sums{};
  for (auto _ : state) {
    multiply_add_rounds(sums, 0.999999, 1e-9, rounds);
    benchmark::DoNotOptimize(sums);
  }
  state.counters["flop/s"] =
      benchmark::Counter(2.0 * chains * rounds, benchmark::Counter::kIsIterationInvariantRate,
                         benchmark::Counter::kIs1000);
}

void sizes(benchmark::internal::Benchmark* bench) {
  bench->ArgNames({"parameters", "reflections", "complex"})->Unit(benchmark::kMillisecond);
  for (const int complex : {0, 1})
    for (const auto& [parameters, reflections] :
         {std::pair{3, 500}, {9, 500}, {9, 2000}, {9, 8000}})
      bench->Args({parameters, reflections, complex});
}

BENCHMARK(fast)->Apply(sizes);
BENCHMARK(fast_forms)->Apply(sizes);
BENCHMARK(plain)
    ->ArgNames({"parameters", "reflections", "complex"})
    ->Args({9, 500, 1})
    ->Args({9, 2000, 0})
    ->Args({9, 2000, 1})
    ->Unit(benchmark::kMillisecond);
BENCHMARK(multiply_add)->Unit(benchmark::kMillisecond);

}  // namespace
}  // namespace spinsieve
