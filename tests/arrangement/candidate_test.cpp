#include "arrangement/candidate.hpp"

#include <map>
#include <random>
#include <set>

#include <gtest/gtest.h>

#include "arrangement/phase_lattice.hpp"

namespace spinsieve {
namespace {

FractionVector vector_of(const std::array<const char*, 3>& v) {
  return {parse_fraction(v[0]), parse_fraction(v[1]), parse_fraction(v[2])};
}

struct Case {
  const char* what;
  int hall_number;
  std::array<const char*, 3> site;
  std::array<const char*, 3> k;
};

const Case cases[] = {
    {"k = 0", 292, {"0", "0", "1/2"}, {"0", "0", "0"}},
    {"k = 0, several copies of a two-dimensional irrep", 419, {"0", "0", "0"}, {"0", "0", "0"}},
    {"zone boundary, two-dimensional", 292, {"0", "0", "1/2"}, {"1/2", "0", "0"}},
    {"complex pair at 2k = 0", 292, {"0.1", "0.2", "0.3"}, {"1/2", "0", "1/2"}},
    {"pseudoreal at 2k = 0", 290, {"0.1", "0.2", "0.3"}, {"1/2", "1/2", "1/2"}},
    {"pseudoreal at 2k not 0", 479, {"0", "0", "0.27"}, {"1/3", "1/3", "1/2"}},
    {"special phases, 3k = 0", 488, {"0", "0", "0"}, {"1/3", "1/3", "1"}},
    {"order 7 on a line", 419, {"0", "0", "0"}, {"0", "0", "2/7"}},
    {"order 4 in an F lattice", 523, {"0", "0", "0"}, {"1/2", "0", "1"}},
    {"-k not in the star", 516, {"0.1", "0.1", "0.1"}, {"1/2", "1/2", "1/2"}},
    {"R lattice", 460, {"0", "0", "0.355"}, {"0", "0", "3/2"}},
    {"exchanged sub-orbits", 294, {"0.02", "0.08", "1/4"}, {"0", "1/5", "0"}},
    {"six-dimensional irrep", 530, {"0", "0", "0"}, {"0", "0", "1"}},
};

std::vector<WavevectorModes> modes_of(const Case& c) {
  const Site site{"M", vector_of(c.site), {}};
  return {wavevector_modes(
      std::make_shared<SymmetryTables>(SpaceGroup::from_hall_number(c.hall_number)),
      Wavevector(vector_of(c.k)), std::span(&site, 1))};
}

using Vector = std::array<double, 3>;

/// The real moments of a candidate at random parameters, straight from the field's definition.
class RandomField {
 public:
  RandomField(const Candidate& candidate, const SpaceGroup& group, std::mt19937& random)
      : arm_(candidate.field.arms[0]), group_(group) {
    std::uniform_real_distribution<double> draw(0.2, 1);
    S_.resize(arm_.atoms.size());
    for (std::size_t p = 0; p < candidate.field.parameters; ++p) {
      const double c = draw(random);
      for (std::size_t j = 0; j < S_.size(); ++j) {
        const auto v = value(arm_.components[p * S_.size() + j]);
        for (std::size_t i = 0; i < 3; ++i) S_[j][i] += c * v[i];
      }
    }
  }

  Vector at(const FractionVector& position) const {
    for (std::size_t j = 0; j < S_.size(); ++j) {
      const FractionVector L = position - arm_.atoms[j].position;
      if (!group_.in_lattice(L)) continue;
      const std::complex<double> factor = Phase(dot(arm_.k, L)).factor();
      Vector m{};
      for (std::size_t i = 0; i < 3; ++i)
        m[i] =
            arm_.self_conjugate ? S_[j][i].real() * factor.real() : 2 * (S_[j][i] * factor).real();
      return m;
    }
    ADD_FAILURE() << "no atom at " << to_string(position);
    return {};
  }

  std::span<const FieldAtom> atoms() const { return arm_.atoms; }
  std::span<const FractionVector> centrings() const { return group_.centrings(); }

 private:
  const ExactArm& arm_;
  const SpaceGroup& group_;
  std::vector<std::array<std::complex<double>, 3>> S_;
};

bool is_kept(const RandomField& field, const PrimedOperation& g) {
  const Operation back = g.operation.inverse();
  const IntMatrix& R = g.operation.rotation;
  const double sign = determinant(R) * (g.primed ? -1 : 1);
  // Cells enough to tell the arms of a star apart: all centrings in two cells along each axis.
  std::vector<FractionVector> shifts;
  for (const FractionVector& centring : field.centrings())
    for (int cell = 0; cell < 8; ++cell)
      shifts.push_back(centring + FractionVector{Fraction(cell % 2), Fraction(cell / 2 % 2),
                                                 Fraction(cell / 4)});
  for (const FieldAtom& atom : field.atoms())
    for (const FractionVector& shift : shifts) {
      const FractionVector position = atom.position + shift;
      const Vector from = field.at(back.apply(position));
      const Vector here = field.at(position);
      for (std::size_t i = 0; i < 3; ++i) {
        double turned = 0;
        for (std::size_t j = 0; j < 3; ++j) turned += sign * R[i][j] * from[j];
        if (std::abs(turned - here[i]) > 1e-8) return false;
      }
    }
  return true;
}

TEST(CandidateTest, EveryOperationOfTheGroupLeavesTheFieldAsItIs) {
  std::mt19937 random(3);
  for (const Case& c : cases) {
    SCOPED_TRACE(c.what);
    const std::vector<WavevectorModes> modes = modes_of(c);
    for (const Candidate& candidate : enumerate_candidates(modes, {})) {
      SCOPED_TRACE(candidate.id);
      ASSERT_TRUE(candidate.group.has_value());
      const RandomField field(candidate, modes[0].little_group.group(), random);
      for (const PrimedOperation& g : candidate.group->operations()) EXPECT_TRUE(is_kept(field, g));
    }
  }
}

// The plain way: try every operation of the parent with every translation class and both primes.
TEST(CandidateTest, NoOtherOperationOfTheParentKeepsAGenericField) {
  std::mt19937 random(5);
  for (const Case& c : cases) {
    SCOPED_TRACE(c.what);
    const std::vector<WavevectorModes> modes = modes_of(c);
    const LittleGroup& little_group = modes[0].little_group;
    const SpaceGroup& group = little_group.group();
    const PhaseLattice phases(little_group.tables(), little_group.k().constant);
    for (const Candidate& candidate : enumerate_candidates(modes, {})) {
      SCOPED_TRACE(candidate.id);
      const RandomField field(candidate, group, random);
      std::size_t kept = 0;
      for (const Operation& operation : group.operations())
        for (const FractionVector& T : phases.classes())
          for (const bool primed : {false, true}) {
            PrimedOperation g{operation, primed};
            g.operation.translation = g.operation.translation + T;
            if (is_kept(field, g)) ++kept;
          }
      EXPECT_EQ(kept, candidate.group->operations().size());
      // Domains are the index of the symmetry in G × {1, 1′}.
      EXPECT_EQ(candidate.domains.total() * kept,
                2 * group.order() * static_cast<std::size_t>(phases.order()));
    }
  }
}

TEST(CandidateTest, ParametersAreIndependent) {
  for (const Case& c : cases) {
    SCOPED_TRACE(c.what);
    const std::vector<WavevectorModes> modes = modes_of(c);
    for (const Candidate& candidate : enumerate_candidates(modes, {})) {
      SCOPED_TRACE(candidate.id);
      // A vanishing combination would make one component a multiple of others: compare the rank of
      // the real matrix of all components by Gram–Schmidt with a wide margin.
      const ExactArm& arm = candidate.field.arms[0];
      std::vector<std::vector<double>> rows;
      for (std::size_t p = 0; p < candidate.field.parameters; ++p) {
        std::vector<double> row;
        for (std::size_t j = 0; j < arm.atoms.size(); ++j)
          for (const auto& v : value(arm.components[p * arm.atoms.size() + j])) {
            row.push_back(v.real());
            row.push_back(arm.self_conjugate ? 0 : v.imag());
          }
        for (const std::vector<double>& earlier : rows) {
          double overlap = 0;
          for (std::size_t i = 0; i < row.size(); ++i) overlap += row[i] * earlier[i];
          for (std::size_t i = 0; i < row.size(); ++i) row[i] -= overlap * earlier[i];
        }
        double norm = 0;
        for (const double x : row) norm += x * x;
        EXPECT_GT(norm, 1e-6);
        for (double& x : row) x /= std::sqrt(norm);
        rows.push_back(row);
      }
    }
  }
}

TEST(CandidateTest, IncommensurateOneDimensionalIrrepsHaveALockedAndAFreePhase) {
  // Kenzelmann et al. (2005), PRL 95, 087206: TbMnO3, Mn, k = (0, q, 0): each irrep three times.
  const auto modes = modes_of({"", 294, {"1/2", "0", "0"}, {"0", "7/25", "0"}});
  std::map<std::size_t, std::vector<std::size_t>> parameters;
  for (const Candidate& candidate : enumerate_candidates(modes, {})) {
    EXPECT_FALSE(candidate.group.has_value());
    parameters[candidate.parts[0].irrep].push_back(candidate.field.parameters);
  }
  ASSERT_EQ(parameters.size(), 4U);
  for (const auto& [irrep, counts] : parameters)
    EXPECT_EQ(counts, (std::vector<std::size_t>{6, 3}));
}

TEST(CandidateTest, ASingleIncommensurateCopyListsNoFreePhase) {
  // Herpin & Meriel (1961), J. Phys. Radium 22, 337: MnAu2, k = (0, 0, 0.28), moments along c once.
  const auto modes = modes_of({"", 424, {"0", "0", "0"}, {"0", "0", "7/25"}});
  std::vector<std::string> ids;
  bool circular = false;
  for (const Candidate& candidate : enumerate_candidates(modes, {})) {
    if (candidate.field.parameters != 1) continue;
    ids.push_back(candidate.id);
    const auto S = value(candidate.field.arms[0].components[0]);
    // S·S = 0: the helix.
    circular = circular || std::abs(S[0] * S[0] + S[1] * S[1] + S[2] * S[2]) < 1e-12;
  }
  EXPECT_EQ(ids.front(), "2a");
  EXPECT_TRUE(circular);
}

TEST(CandidateTest, IdsFollowTheIrrepAndTheWavevector) {
  const Site site{"M", vector_of({"0", "0", "0"}), {}};
  const auto tables = std::make_shared<SymmetryTables>(SpaceGroup::from_hall_number(517));
  std::vector<WavevectorModes> two;
  two.push_back(
      wavevector_modes(tables, Wavevector(vector_of({"0", "0", "1/2"})), std::span(&site, 1)));
  two.push_back(
      wavevector_modes(tables, Wavevector(vector_of({"1/2", "1/2", "1/2"})), std::span(&site, 1)));
  std::set<std::string> ids;
  for (const Candidate& candidate : enumerate_candidates(two, {})) ids.insert(candidate.id);
  EXPECT_TRUE(ids.contains("k1:2a"));
  EXPECT_TRUE(ids.contains("k2:7f"));
  EXPECT_EQ(direction_letter(0), "a");
  EXPECT_EQ(direction_letter(25), "z");
  EXPECT_EQ(direction_letter(26), "aa");
  EXPECT_EQ(parameter_name(0), "u");
}

TEST(CandidateTest, FiltersKeepIds) {
  const auto modes = modes_of(cases[1]);
  EnumerationOptions options;
  options.directions = DirectionFilter::maximal;
  std::vector<std::string> all;
  for (const Candidate& candidate : enumerate_candidates(modes, {}))
    if (candidate.maximal) all.push_back(candidate.id);
  std::vector<std::string> kept;
  for (const Candidate& candidate : enumerate_candidates(modes, options))
    kept.push_back(candidate.id);
  EXPECT_EQ(kept, all);
  EXPECT_EQ(kept, (std::vector<std::string>{"2a", "3a", "9b", "9c"}));
}

TEST(CandidateTest, FreeParametersInTheWavevectorAreRefused) {
  Wavevector k;
  parse_component("u", 0, k);
  const Site site{"M", vector_of({"0", "0", "0"}), {}};
  const std::vector<WavevectorModes> modes{wavevector_modes(
      std::make_shared<SymmetryTables>(SpaceGroup::from_hall_number(517)), k, std::span(&site, 1))};
  try {
    enumerate_candidates(modes, {});
    FAIL();
  } catch (const Error& error) {
    EXPECT_EQ(error.message(),
              "the wavevector u, 0, 0 has free parameters; arrangements need numbers, such as 1/4 "
              "for u");
  }
}

TEST(PhaseLatticeTest, ClassesRunThroughAllPhases) {
  const SymmetryTables tables(SpaceGroup::from_hall_number(523));
  for (const auto& k : {std::array<const char*, 3>{"1/2", "0", "1"},
                        {"1/3", "1/5", "0"},
                        {"0", "0", "0"},
                        {"1/2", "1/2", "1/2"}}) {
    const FractionVector vector = vector_of(k);
    const PhaseLattice phases(tables, vector);
    std::set<Fraction> seen;
    for (const FractionVector& T : phases.classes()) {
      EXPECT_TRUE(tables.group().in_lattice(T));
      seen.insert(Phase(dot(vector, T)).turns());
    }
    EXPECT_EQ(seen.size(), static_cast<std::size_t>(phases.order()));
    for (const FractionVector& row : phases.kernel().basis()) {
      EXPECT_TRUE(Phase(dot(vector, row)).is_zero());
      EXPECT_TRUE(tables.group().in_lattice(row));
    }
  }
}

}  // namespace
}  // namespace spinsieve
