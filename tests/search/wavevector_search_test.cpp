#include "search/wavevector_search.hpp"

#include <algorithm>
#include <thread>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "search/fixed_subspaces.hpp"
#include "synthetic.hpp"

namespace spinsieve {
namespace {

using ::testing::HasSubstr;
using ::testing::ThrowsMessage;

/// Runs bodies on two threads, from both ends.
class TwoThreads : public Executor {
 public:
  void for_each(std::size_t count, const std::function<void(std::size_t)>& body) override {
    std::thread other([&] {
      for (std::size_t i = count; i-- > count / 3;) body(i);
    });
    for (std::size_t i = 0; i < count / 3; ++i) body(i);
    other.join();
  }
};

/// Position of the first solution whose allowed range holds k, or −1.
int rank_of(const SearchResult& result, const Cell& cell, const SpaceGroup& group,
            const Vector3& k) {
  for (std::size_t i = 0; i < result.solutions.size(); ++i)
    if (class_distance(cell, group, k, result.solutions[i].vector.k) <=
        result.solutions[i].reach + 1e-9)
      return static_cast<int>(i);
  return -1;
}

Vector3 random_member(const Wavevector& family, std::mt19937& random) {
  Vector3 k = to_double(family.constant);
  for (const FractionVector& row : family.along) {
    const double value = draw(random);
    for (std::size_t i = 0; i < 3; ++i) k[i] += value * to_double(row)[i];
  }
  return k;
}

struct Score {
  int cases = 0;
  int first = 0;
};

/// Searches for k of every family of every synthetic crystal; the true k must never be missed.
std::array<Score, 4> scores(const SyntheticOptions& options, unsigned seed, int general_cases) {
  std::mt19937 random(seed);
  Executor executor;
  std::array<Score, 4> result{};
  for (const SyntheticCrystal& crystal : synthetic_crystals()) {
    const SpaceGroup group = parse_space_group(crystal.group);
    for (const FixedSubspace& family : fixed_subspaces(group, holohedry(group))) {
      const int repeats = family.dimension() == 3 ? general_cases : 1;
      for (int i = 0; i < repeats; ++i) {
        const Vector3 k = random_member(family.k, random);
        SearchProblem problem = synthetic_problem(crystal.cell, group, k, options, random);
        // The wider kinds are searched where the truth is one of them.
        problem.deepest = std::max(family.kind, StratumKind::line);
        SCOPED_TRACE(std::string(crystal.group) + " k = " + std::to_string(k[0]) + ", " +
                     std::to_string(k[1]) + ", " + std::to_string(k[2]));
        const SearchResult found = locate(problem, executor);
        const int rank = rank_of(found, crystal.cell, group, k);
        EXPECT_TRUE(found.coverage.complete);
        EXPECT_GE(rank, 0);
        Score& score = result[family.dimension()];
        ++score.cases;
        score.first += rank == 0 ? 1 : 0;
      }
    }
  }
  return result;
}

void expect_first(const std::array<Score, 4>& scores, double points, double others) {
  EXPECT_GE(scores[0].first, points * scores[0].cases) << scores[0].first << " points";
  for (std::size_t kind = 1; kind < 4; ++kind)
    EXPECT_GE(scores[kind].first, others * scores[kind].cases)
        << scores[kind].first << " of " << scores[kind].cases << " of dimension " << kind;
}

TEST(WavevectorSearchTest, TrueVectorIsFoundAndFirstAtFineResolution) {
  expect_first(scores({.relative_tolerance = 0.003 / 5}, 11, 6), 0.9, 0.7);
}

TEST(WavevectorSearchTest, TrueVectorIsFoundAndFirstBesideAForeignLine) {
  expect_first(scores({.relative_tolerance = 0.003 / 5, .impurity = true}, 12, 4), 0.9, 0.7);
}

TEST(WavevectorSearchTest, TrueVectorIsNeverMissedAtCoarseResolution) {
  scores({.relative_tolerance = 0.008 / 5}, 13, 4);
  scores({.relative_tolerance = 0.008 / 5, .impurity = true}, 14, 2);
}

TEST(WavevectorSearchTest, SlowWholeZoneBehindEverySymmetryPoint) {
  std::mt19937 random(15);
  Executor executor;
  for (const SyntheticCrystal& crystal : synthetic_crystals()) {
    const SpaceGroup group = parse_space_group(crystal.group);
    for (const FixedSubspace& family : fixed_subspaces(group, holohedry(group))) {
      if (family.kind != StratumKind::point) continue;
      const Vector3 k = to_double(family.k.constant);
      const SearchProblem problem = synthetic_problem(crystal.cell, group, k, {}, random);
      SCOPED_TRACE(std::string(crystal.group) + " " + to_string(family.k));
      const SearchResult found = locate(problem, executor);
      EXPECT_EQ(rank_of(found, crystal.cell, group, k), 0);
      EXPECT_EQ(found.solutions.front().kind, StratumKind::point);
    }
  }
}

// The slow plain version: every vector of a dense grid that explains the lines must lie within
// reach of a listed solution.
TEST(WavevectorSearchTest, DenseGridFindsNothingElse) {
  std::mt19937 random(16);
  Executor executor;
  const struct {
    const char* group;
    Cell cell;
    Vector3 k;
  } cases[] = {
      {"P m m m", Cell(4.1, 5.2, 6.3, 90, 90, 90), {0.21, 0.34, 0.12}},
      {"C 1 2/m 1", Cell(7.1, 4.4, 5.2, 90, 105, 90), {0.31, 0.4, 0.23}},
      {"P -1", Cell(4.3, 4.8, 5.3, 82, 95, 101), {0.5, 0, 0.37}},
      {"P 6/m m m", Cell(4.4, 4.4, 5.1, 90, 90, 120), {0.3, 0.1, 0.5}},
      {"F m -3 m", Cell(6.2, 6.2, 6.2, 90, 90, 90), {0.4, 0.4, 0}},
  };
  for (const auto& [symbol, cell, k] : cases) {
    SCOPED_TRACE(symbol);
    const SpaceGroup group = parse_space_group(symbol);
    const SearchProblem problem = synthetic_problem(
        cell, group, k, {.relative_tolerance = 0.03, .lines = 5, .among = 6}, random);
    const SearchResult found = locate(problem, executor);
    ASSERT_TRUE(found.coverage.complete);
    EXPECT_GE(rank_of(found, cell, group, k), 0);
    std::vector<IntVector> nodes;
    const int reach = static_cast<int>(problem.lines.back().q * 7.1 / 6.283) + 2;
    for (int h = -reach; h <= reach; ++h)
      for (int l = -reach; l <= reach; ++l)
        for (int m = -reach; m <= reach; ++m)
          if (group.in_reciprocal_lattice({h, l, m})) nodes.push_back({h, l, m});
    constexpr int steps = 30;
    int explained = 0;
    for (int a = 0; a < steps; ++a)
      for (int b = 0; b < steps; ++b)
        for (int c = 0; c < steps; ++c) {
          const Vector3 trial = {a / 30.0, b / 30.0, c / 30.0};
          std::vector<bool> seen(problem.lines.size());
          for (const IntVector& node : nodes) {
            const double q = cell.q({node[0] + trial[0], node[1] + trial[1], node[2] + trial[2]});
            for (std::size_t i = 0; i < seen.size(); ++i)
              seen[i] = seen[i] || std::abs(q - problem.lines[i].q) <= problem.lines[i].tolerance;
          }
          if (!std::ranges::all_of(seen, [](bool x) { return x; })) continue;
          ++explained;
          EXPECT_GE(rank_of(found, cell, group, trial), 0)
              << "grid point " << trial[0] << ", " << trial[1] << ", " << trial[2];
        }
    EXPECT_GT(explained, 0);
  }
}

TEST(WavevectorSearchTest, ResultDoesNotDependOnThreads) {
  std::mt19937 random(17);
  const SpaceGroup group = parse_space_group("P 4/n m m");
  const Cell cell(4.2, 4.2, 8.7, 90, 90, 90);
  const SearchProblem problem =
      synthetic_problem(cell, group, {0.5, 0.5, 0.5}, {.relative_tolerance = 0.0016}, random);
  Executor serial;
  TwoThreads parallel;
  const SearchResult a = locate(problem, serial);
  const SearchResult b = locate(problem, parallel);
  ASSERT_GT(a.found, 1U);
  ASSERT_EQ(a.found, b.found);
  EXPECT_EQ(a.coverage.excluded_fraction, b.coverage.excluded_fraction);
  for (std::size_t i = 0; i < a.solutions.size(); ++i) {
    EXPECT_EQ(a.solutions[i].vector.k, b.solutions[i].vector.k);
    EXPECT_EQ(a.solutions[i].expected, b.solutions[i].expected);
  }
}

TEST(WavevectorSearchTest, PublishedModulationsComeBackFromTheirOwnLines) {
  const struct {
    const char* group;
    Cell cell;
    Vector3 k;
    const char* family;
    const char* source;
  } cases[] = {
      {"P b n m",
       Cell(5.293, 5.838, 7.403, 90, 90, 90),
       {0, 0.28, 0},
       "0, u, 0",
       "TbMnO3, Kenzelmann et al., Phys. Rev. Lett. 95 (2005) 087206; cell and k from memory"},
      {"I 4/m m m",
       Cell(3.363, 3.363, 8.592, 90, 90, 90),
       {0, 0, 0.28},
       "0, 0, u",
       "MnAu2, Herpin & Meriel, J. Phys. Radium 22 (1961) 337; cell from memory"},
      {"P 4_2/m n m",
       Cell(4.396, 4.396, 2.871, 90, 90, 90),
       {0, 0, 2.0 / 7},
       "0, 0, u",
       "beta-MnO2, Yoshimori, J. Phys. Soc. Jpn 14 (1959) 807; cell from memory"},
      {"F m -3 m",
       Cell(4.445, 4.445, 4.445, 90, 90, 90),
       {0.5, 0.5, 0.5},
       "1/2, 1/2, 1/2",
       "MnO, Shull, Strauser & Wollan, Phys. Rev. 83 (1951) 333; cell 8.873 Å halved"},
  };
  Executor executor;
  for (const auto& [symbol, cell, k, family, source] : cases) {
    SCOPED_TRACE(source);
    const SpaceGroup group = parse_space_group(symbol);
    SearchProblem problem{cell, group, {}, {}, {}};
    std::vector<double> lines = satellite_lines(cell, group, k, 4.5, 1e-3);
    ASSERT_GE(lines.size(), 4U);
    lines.resize(std::min<std::size_t>(lines.size(), 6));
    for (const double q : lines)
      problem.lines.push_back({std::round(q * 1000) / 1000, 0.0016 * q, 0, false, "", {}});
    const SearchResult found = locate(problem, executor);
    ASSERT_FALSE(found.solutions.empty());
    const Solution& best = found.solutions.front();
    EXPECT_EQ(to_string(best.vector.family), family);
    for (std::size_t i = 0; i < 3; ++i) EXPECT_NEAR(best.vector.k[i], k[i], 2e-3);
  }
}

TEST(WavevectorSearchTest, SimplestFractionIsOffered) {
  const SpaceGroup group = parse_space_group("P 4_2/m n m");
  const Cell cell(4.396, 4.396, 2.871, 90, 90, 90);
  SearchProblem problem{cell, group, {}, {}, {}};
  for (const double q : satellite_lines(cell, group, {0, 0, 2.0 / 7}, 3.2, 1e-3))
    problem.lines.push_back({q, 0.0005 * q, 0, false, "", {}});
  Executor executor;
  const SearchResult found = locate(problem, executor);
  ASSERT_FALSE(found.solutions.empty());
  ASSERT_TRUE(found.solutions.front().commensurate.has_value());
  EXPECT_EQ(to_string(*found.solutions.front().commensurate), "0, 0, 2/7");
}

TEST(WavevectorSearchTest, StarsThatShareTheirPositionsAreTied) {
  Executor executor;
  const Cell cell(6.4, 6.4, 6.4, 90, 90, 90);
  const struct {
    const char* group;
    Vector3 k;
    StratumKind kind;
    std::size_t ties;
    const char* source;
  } cases[] = {
      {"P 2_1 3", {0.13, 0.31, 0}, StratumKind::plane, 1, "by hand: 24 arms of m-3m, 12 of 23"},
      // 48 arms of m-3m; 23 carries k to 12, and -k to 12 more that count as the same star.
      {"P 2_1 3", {0.13, 0.31, 0.22}, StratumKind::general, 1, "by hand: 48 arms, 2 times 12"},
      {"P m -3 m", {0.13, 0.31, 0}, StratumKind::plane, 0, "by hand: one star"},
  };
  for (const auto& [symbol, k, kind, ties, source] : cases) {
    SCOPED_TRACE(source);
    const SpaceGroup group = parse_space_group(symbol);
    SearchProblem problem{cell, group, {}, {}, {}};
    for (const double q : satellite_lines(cell, group, k, 1.7, 1e-3))
      problem.lines.push_back({q, 0.0005 * q, 0, false, "", {}});
    const SearchResult found = locate(problem, executor);
    ASSERT_FALSE(found.solutions.empty());
    EXPECT_EQ(found.solutions.front().kind, kind);
    EXPECT_EQ(found.solutions.front().tied_with.size(), ties);
  }
}

TEST(WavevectorSearchTest, CellToleranceWidensTheSearch) {
  Executor executor;
  const SpaceGroup group = parse_space_group("P n m a");
  const Cell real(5.74 * 1.003, 7.69 * 0.997, 5.53 * 1.003, 90, 90, 90);
  const Vector3 k = {0, 0.3, 0};
  SearchProblem problem{Cell(5.74, 7.69, 5.53, 90, 90, 90), group, {}, {}, {}};
  for (const double q : satellite_lines(real, group, k, 1.9, 1e-3))
    problem.lines.push_back({q, 0.0003 * q, 0, false, "", {}});
  problem.deepest = StratumKind::line;
  EXPECT_EQ(locate(problem, executor).found, 0U) << "the stated cell does not fit these lines";
  problem.options.cell_tolerance = 0.004;
  const SearchResult found = locate(problem, executor);
  ASSERT_FALSE(found.solutions.empty());
  EXPECT_EQ(to_string(found.solutions.front().vector.family), "0, u, 0");
  EXPECT_NEAR(found.solutions.front().strain[1], -0.003, 5e-4);
}

TEST(WavevectorSearchTest, SharedErrorsWithinTheirBoundsLoseNothing) {
  std::mt19937 random(18);
  Executor executor;
  const SpaceGroup group = parse_space_group("P n m a");
  const Cell cell(5.74, 7.69, 5.53, 90, 90, 90);
  const Vector3 k = {0, 0.3, 0};
  for (int i = 0; i < 5; ++i) {
    // The real cell and zero differ from what the search is told.
    const Cell real(5.74 * (1 + 0.001 * (2 * draw(random) - 1)),
                    7.69 * (1 + 0.001 * (2 * draw(random) - 1)),
                    5.53 * (1 + 0.001 * (2 * draw(random) - 1)), 90, 90, 90);
    SearchProblem problem = synthetic_problem(real, group, k, {}, random);
    problem.cell = cell;
    problem.options.cell_tolerance = 0.001;
    problem.deepest = StratumKind::plane;
    const double zero = 2 * draw(random) - 1;
    for (SearchLine& line : problem.lines) {
      line.shift = 0.002;
      line.q -= zero * line.shift;
    }
    const SearchResult found = locate(problem, executor);
    ASSERT_FALSE(found.solutions.empty());
    EXPECT_EQ(rank_of(found, cell, group, k), 0);
    EXPECT_EQ(to_string(found.solutions.front().vector.family), "0, u, 0");
    EXPECT_EQ(found.solutions.front().matched, found.solutions.front().of);
  }
}

TEST(WavevectorSearchTest, HarmonicsAndTheLatticeJoinWhenOneVectorIsNotEnough) {
  Executor executor;
  const SpaceGroup group = parse_space_group("P n m a");
  const Cell cell(5.74, 7.69, 5.53, 90, 90, 90);
  const struct {
    std::vector<int> harmonics;
    Vector3 other;
  } cases[] = {{{0, 1}, {0, 0, 0}}, {{1, 3}, {0, 0.63, 0}}};
  for (const auto& [harmonics, other] : cases) {
    SearchProblem problem{cell, group, {}, {}, {}};
    std::vector<double> lines = satellite_lines(cell, group, {0, 0.21, 0}, 1.7, 1e-3);
    const std::vector<double> more = satellite_lines(cell, group, other, 1.7, 1e-3);
    ASSERT_GT(more.size(), 1U);
    lines.insert(lines.end(), more.begin(), more.end());
    for (const double q : lines) problem.lines.push_back({q, 0.0006 * q, 0, false, "", {}});
    const SearchResult found = locate(problem, executor);
    ASSERT_FALSE(found.solutions.empty());
    const Solution& best = found.solutions.front();
    EXPECT_EQ(best.harmonics, harmonics);
    EXPECT_EQ(to_string(best.vector.family), "0, u, 0");
    EXPECT_NEAR(best.vector.k[1], 0.21, 1e-3);
    EXPECT_EQ(best.matched, best.of);
  }
}

TEST(WavevectorSearchTest, TooFewLinesLeaveFamiliesUndetermined) {
  const SpaceGroup group = parse_space_group("P m m m");
  const Cell cell(4.1, 5.2, 6.3, 90, 90, 90);
  SearchProblem problem{cell, group, {{0.9, 0.001, 0, false, "", {}}}, {}, {}};
  problem.lines.push_back({1.3, 0.001, 0, false, "", {}});
  Executor executor;
  const SearchResult found = locate(problem, executor);
  EXPECT_FALSE(found.coverage.complete);
  ASSERT_EQ(found.undetermined.size(), 1U);
  EXPECT_EQ(to_string(found.undetermined.front()), "u, v, w");
  EXPECT_EQ(found.notes.front(),
            "2 lines that must match cannot fix the 3 free components of a k of kind general; its "
            "families are listed undetermined");
}

TEST(WavevectorSearchTest, CellInWhichEverythingMatchesIsSaid) {
  const SpaceGroup group = parse_space_group("P m m m");
  const Cell cell(21, 23, 29, 90, 90, 90);
  SearchProblem problem{cell, group, {}, {}, {}};
  for (const double q : {1.1, 1.4, 1.7, 2.1, 2.2})
    problem.lines.push_back({q, 0.008 * q, 0, false, "", {}});
  problem.deepest = StratumKind::general;
  Executor executor;
  const SearchResult found = locate(problem, executor);
  EXPECT_FALSE(found.coverage.complete);
  ASSERT_FALSE(found.notes.empty());
  EXPECT_THAT(found.notes.back(), HasSubstr("nearly everything matches"));
}

TEST(WavevectorSearchTest, RefusesWhatItCannotSearch) {
  const SpaceGroup group = parse_space_group("P m m m");
  const Cell cell(4.1, 5.2, 6.3, 90, 90, 90);
  Executor executor;
  const auto message = [&](std::vector<SearchLine> lines, int foreign) {
    SearchProblem problem{cell, group, std::move(lines), {}, {}};
    problem.options.foreign = foreign;
    try {
      locate(problem, executor);
    } catch (const Error& error) {
      return error.message();
    }
    return std::string("accepted");
  };
  EXPECT_EQ(message({}, 0),
            "no line positions to locate a wavevector from; at least one line is needed");
  EXPECT_EQ(message({{1.2, 0, 0, false, "d 5.236", {}}}, 0),
            "line 'd 5.236' with position tolerance 0 Å⁻¹; it must be positive");
  EXPECT_EQ(message({{1.2, 0.5, 0, false, "", {}}}, 0),
            "line 'q 1.2' with position tolerance 0.5 Å⁻¹; accepted is at most a tenth of its "
            "|Q|, 0.12 Å⁻¹");
  EXPECT_EQ(message({{-1, 0.01, 0, false, "", {}}}, 0),
            "line 'q -1' at |Q| = -1 Å⁻¹; a position must be positive and finite");
  EXPECT_EQ(message({{1, 0.01, 0, false, "", {}}}, 1),
            "foreign: 1 of 1 lines that must be explained; it must leave at least one");
  EXPECT_THAT(message({{1, 0.01, 0, false, "", {}}, {900, 0.01, 0, false, "", {}}}, 0),
              HasSubstr("line 'q 900' lies beyond the range"));
}

}  // namespace
}  // namespace spinsieve
