#include "modes/magnetic_representation.hpp"

#include <random>

#include <gtest/gtest.h>

#include "modes/isotypic_space.hpp"
#include "modes/wavevector_modes.hpp"

namespace spinsieve {
namespace {

FractionVector vector_of(const char* x, const char* y, const char* z) {
  return {parse_fraction(x), parse_fraction(y), parse_fraction(z)};
}

struct FieldCase {
  const char* what;
  int hall_number;
  std::array<const char*, 3> site;
  std::array<const char*, 3> k;
};

/// Every kind of wavevector and lattice on which a sign of the convention can show.
const FieldCase field_cases[] = {
    {"k = 0, four sublattices", 292, {"0", "0", "1/2"}, {"0", "0", "0"}},
    {"k = 0, general position", 292, {"0.11", "0.23", "0.37"}, {"0", "0", "0"}},
    {"zone boundary, two-dimensional", 292, {"0", "0", "1/2"}, {"1/2", "0", "0"}},
    {"zone boundary, complex one-dimensional", 292, {"0.1", "0.2", "0.3"}, {"1/2", "0", "1/2"}},
    {"zone boundary, pseudoreal", 290, {"0.1", "0.2", "0.3"}, {"1/2", "1/2", "1/2"}},
    {"line, generic value", 294, {"0.02", "0.08", "1/4"}, {"0", "7/25", "0"}},
    {"plane, generic value", 292, {"0.1", "1/4", "0.3"}, {"1/7", "0", "2/11"}},
    {"general vector", 62, {"0.1", "0.2", "0.3"}, {"1/7", "2/9", "3/11"}},
    {"F lattice, L", 523, {"0", "0", "0"}, {"1/2", "1/2", "1/2"}},
    {"F lattice, W, 2k no lattice vector", 526, {"1/2", "1/2", "1/2"}, {"1/2", "0", "1"}},
    {"F lattice, d glides, X", 526, {"1/8", "1/8", "1/8"}, {"0", "0", "1"}},
    {"I lattice, P, -k not in the star", 516, {"0.1", "0.1", "0.1"}, {"1/2", "1/2", "1/2"}},
    {"I lattice, dense matrices", 530, {"1/8", "0", "1/4"}, {"1/2", "1/2", "1/2"}},
    {"P lattice, dense matrices", 492, {"0.1", "0.1", "0.1"}, {"1/2", "1/2", "1/2"}},
    {"R lattice, hexagonal axes", 460, {"0", "0", "0.355"}, {"0", "0", "3/2"}},
    {"hexagonal K", 488, {"0", "0", "0"}, {"1/3", "1/3", "0"}},
    {"hexagonal H, polar", 479, {"0.3", "0", "0"}, {"1/3", "1/3", "1/2"}},
    {"screw axis 6_1", 472, {"0.1", "0.2", "0.3"}, {"0", "0", "1/2"}},
    {"k given unreduced", 419, {"0", "0", "0"}, {"3", "-2", "9/7"}},
    {"arm other than the canonical one", 517, {"0.1", "0.2", "0.3"}, {"-1/2", "1/3", "0"}},
};

using Moment = std::array<std::complex<double>, 3>;

/// m(r) of every atom near the origin, in lattice components, straight from the definition
/// m_j(L) = S_j exp(2πi k·L), L counted from the listed atom.
class Field {
 public:
  Field(const WavevectorModes& modes, std::vector<Moment> S) : modes_(modes), S_(std::move(S)) {}

  Moment at(const FractionVector& position) const {
    const SpaceGroup& group = modes_.little_group.group();
    const auto atoms = modes_.sites[0].orbit().atoms();
    for (std::size_t j = 0; j < atoms.size(); ++j) {
      const FractionVector L = position - atoms[j].position;
      if (!group.in_lattice(L)) continue;
      const std::complex<double> factor = Phase(dot(modes_.little_group.k().constant, L)).factor();
      Moment m = S_[j];
      for (auto& component : m) component *= factor;
      return m;
    }
    ADD_FAILURE() << "no atom at " << to_string(position);
    return {};
  }

 private:
  const WavevectorModes& modes_;
  std::vector<Moment> S_;
};

/// (g m)(r) = det(R) R m(g⁻¹ r): what an operation does to a field of axial vectors.
Moment acted(const Field& field, const Operation& g, const FractionVector& position,
             bool conjugated) {
  const Moment m = field.at(g.inverse().apply(position));
  Moment result{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      result[i] += static_cast<double>(determinant(g.rotation) * g.rotation[i][j]) *
                   (conjugated ? std::conj(m[j]) : m[j]);
  return result;
}

/// S_j of amplitudes z[row][copy] over the copies of one irrep, with their reference phases.
std::vector<Moment> fourier_components(const WavevectorModes& modes, const IsotypicSpace& space,
                                       const std::vector<std::vector<std::complex<double>>>& z) {
  const MagneticRepresentation& site = modes.sites[0];
  std::vector<Moment> S(site.orbit().atoms().size());
  for (std::size_t c = 0; c < space.copies.size(); ++c) {
    const ModeCopy& copy = site.copies()[space.copies[c].copy];
    const SubOrbit& suborbit = site.suborbits()[copy.suborbit];
    for (std::size_t b = 0; b < z.size(); ++b)
      for (std::size_t a = 0; a < copy.atoms; ++a) {
        const std::complex<double> factor =
            z[b][c] *
            (space.copies[c].phase + Phase(dot(modes.little_group.k().constant, suborbit.paths[a])))
                .factor();
        for (std::size_t i = 0; i < 3; ++i)
          S[suborbit.atoms[a]][i] += factor * copy.component(b, a)[i].to_complex();
      }
  }
  return S;
}

void expect_equal_fields(const WavevectorModes& modes, const Field& field, const Operation& g,
                         bool conjugated, const Field& expected) {
  for (const OrbitAtom& atom : modes.sites[0].orbit().atoms())
    for (const FractionVector& centring : modes.little_group.group().centrings())
      for (const int x : {0, 1, -2}) {
        const FractionVector position =
            atom.position + centring + FractionVector{Fraction(x), Fraction(1 - x), Fraction(2)};
        const Moment left = acted(field, g, position, conjugated);
        const Moment right = expected.at(position);
        for (std::size_t i = 0; i < 3; ++i) ASSERT_LT(std::abs(left[i] - right[i]), 1e-9);
      }
}

WavevectorModes modes_of(const FieldCase& c) {
  const Site site{"M", vector_of(c.site[0], c.site[1], c.site[2]), {}};
  return wavevector_modes(
      std::make_shared<SymmetryTables>(SpaceGroup::from_hall_number(c.hall_number)),
      Wavevector(vector_of(c.k[0], c.k[1], c.k[2])), std::span(&site, 1));
}

std::vector<std::vector<std::complex<double>>> random_amplitudes(std::size_t rows,
                                                                 std::size_t copies,
                                                                 std::mt19937& random) {
  std::uniform_real_distribution<double> draw(-1, 1);
  std::vector<std::vector<std::complex<double>>> z(rows);
  for (auto& row : z)
    for (std::size_t c = 0; c < copies; ++c) row.emplace_back(draw(random), draw(random));
  return z;
}

// The sign test of the whole project: mixing exp(+2πi k·L) of the field with the wrong sign of
// D({E|T}) = exp(−2πi k·T) shows here and nowhere else.
TEST(ModeFieldTest, RealSpaceFieldsTransformByThePrintedMatrices) {
  std::mt19937 random(7);
  for (const FieldCase& c : field_cases) {
    SCOPED_TRACE(c.what);
    const WavevectorModes modes = modes_of(c);
    const LittleGroup& little_group = modes.little_group;
    for (std::size_t n = 0; n < modes.irreps.size(); ++n) {
      const IsotypicSpace space = isotypic_space(little_group, modes.irreps, modes.sites, n);
      const auto d = static_cast<std::size_t>(modes.irreps[n].dimension);
      const auto z = random_amplitudes(d, space.copies.size(), random);
      const Field field(modes, fourier_components(modes, space, z));
      for (std::size_t i = 0; i < little_group.order(); ++i) {
        const ExactMatrix P = modes.irreps[n].matrices[i].to_exact();
        const std::complex<double> phase = little_group.phase(i).factor();
        auto turned = z;
        for (std::size_t b = 0; b < d; ++b)
          for (std::size_t copy = 0; copy < space.copies.size(); ++copy) {
            turned[b][copy] = 0;
            for (std::size_t e = 0; e < d; ++e)
              turned[b][copy] += phase * P(b, e).to_complex() * z[e][copy];
          }
        expect_equal_fields(modes, field,
                            little_group.group().operations()[little_group.operations()[i]], false,
                            Field(modes, fourier_components(modes, space, turned)));
      }
    }
  }
}

TEST(ModeFieldTest, TranslationsMultiplyByTheConjugatePhase) {
  // D({E|T}) = exp(−2πi k·T) for every lattice vector, centrings included.
  std::mt19937 random(11);
  for (const FieldCase& c : field_cases) {
    SCOPED_TRACE(c.what);
    const WavevectorModes modes = modes_of(c);
    const std::size_t atoms = modes.sites[0].orbit().atoms().size();
    std::uniform_real_distribution<double> draw(-1, 1);
    std::vector<Moment> S(atoms);
    for (Moment& m : S)
      for (auto& component : m) component = {draw(random), draw(random)};
    for (const FractionVector& centring : modes.little_group.group().centrings()) {
      Operation T;
      T.translation = centring + FractionVector{Fraction(1), Fraction(-2), Fraction(3)};
      const std::complex<double> factor =
          Phase(-dot(modes.little_group.k().constant, T.translation)).factor();
      std::vector<Moment> turned = S;
      for (Moment& m : turned)
        for (auto& component : m) component *= factor;
      expect_equal_fields(modes, Field(modes, S), T, false, Field(modes, turned));
    }
  }
}

TEST(ModeFieldTest, OperationsThatReverseKActByThePrintedAntilinearMaps) {
  std::mt19937 random(13);
  int tested = 0;
  for (const FieldCase& c : field_cases) {
    SCOPED_TRACE(c.what);
    const WavevectorModes modes = modes_of(c);
    for (std::size_t n = 0; n < modes.irreps.size(); ++n) {
      const IsotypicSpace space = isotypic_space(modes.little_group, modes.irreps, modes.sites, n);
      if (!space.reversal || space.copies.empty()) continue;
      ++tested;
      const auto d = static_cast<std::size_t>(modes.irreps[n].dimension);
      const std::size_t m = space.copies.size();
      const auto z = random_amplitudes(d, m, random);
      const ExactMatrix U = space.reversal->matrix.to_exact();
      auto turned = z;
      for (std::size_t b = 0; b < d; ++b)
        for (std::size_t copy = 0; copy < m; ++copy) {
          turned[b][copy] = 0;
          for (std::size_t e = 0; e < d; ++e)
            for (std::size_t from = 0; from < m; ++from)
              turned[b][copy] += U(b, e).to_complex() *
                                 space.reversal_copies(copy, from).to_complex() *
                                 std::conj(z[e][from]);
        }
      // The component at k of the turned field is that of the conjugate one.
      expect_equal_fields(modes, Field(modes, fourier_components(modes, space, z)),
                          modes.little_group.group().operations()[space.reversal->operation], true,
                          Field(modes, fourier_components(modes, space, turned)));
    }
  }
  EXPECT_GT(tested, 40);
}

TEST(ModeFieldTest, ReferencePhasesMakeKeptReversalsRealForOneCopyEach) {
  // Published example: TbMnO3 Mn, k = (0, q, 0), Kenzelmann et al. (2005), PRL 95, 087206: with
  // inversion on the Mn site the three components of an irrep are in phase.
  const WavevectorModes modes = modes_of({"", 294, {"1/2", "0", "0"}, {"0", "7/25", "0"}});
  for (std::size_t n = 0; n < 4; ++n) {
    const IsotypicSpace space = isotypic_space(modes.little_group, modes.irreps, modes.sites, n);
    ASSERT_EQ(space.copies.size(), 3U);
    EXPECT_EQ(space.reversal_copies, ExactMatrix::identity(3));
  }
}

TEST(MagneticRepresentationTest, MultiplicitiesFromCopiesAndFromCharactersAgree) {
  for (const FieldCase& c : field_cases) {
    SCOPED_TRACE(c.what);
    const WavevectorModes modes = modes_of(c);
    for (const AtomQuantity quantity :
         {AtomQuantity::axial, AtomQuantity::scalar, AtomQuantity::polar}) {
      const Orbit& orbit = modes.sites[0].orbit();
      const MagneticRepresentation built(modes.little_group, modes.irreps, orbit, quantity);
      const std::vector<std::size_t> counted =
          multiplicities(modes.little_group, modes.irreps, orbit, quantity);
      std::size_t total = 0;
      for (std::size_t n = 0; n < modes.irreps.size(); ++n) {
        EXPECT_EQ(built.multiplicity(n), counted[n]);
        total += counted[n] * static_cast<std::size_t>(modes.irreps[n].dimension);
      }
      EXPECT_EQ(total, orbit.atoms().size() * (quantity == AtomQuantity::scalar ? 1 : 3));
    }
  }
}

TEST(MagneticRepresentationTest, SubOrbitsPartitionTheOrbit) {
  // Brinks et al. (2001), PRB 63, 094411: at k = (0, q, 0) the four Ho atoms of HoMnO3 split into
  // two orbits of two.
  const WavevectorModes modes = modes_of({"", 294, {"0.02", "0.08", "1/4"}, {"0", "7/25", "0"}});
  const auto parts = modes.sites[0].suborbits();
  ASSERT_EQ(parts.size(), 2U);
  EXPECT_EQ(parts[0].atoms.size(), 2U);
  EXPECT_EQ(parts[1].atoms.size(), 2U);
}

TEST(MagneticRepresentationTest, PrintedEntriesStartAtOneAndShowRootsOfUnity) {
  const WavevectorModes modes = modes_of({"", 294, {"1/2", "0", "0"}, {"0", "7/25", "0"}});
  const MagneticRepresentation& site = modes.sites[0];
  const std::vector<PrintedComponent> row =
      printed_row(modes.little_group, site.suborbits()[0], site.copies()[0], 0);
  ASSERT_EQ(row.size(), 4U);
  EXPECT_EQ(row[0].exact[0], "1");
  // exp(iπ·7/25) on the atoms half a cell along b, up to sign.
  bool found = false;
  for (const PrintedComponent& component : row)
    found = found || component.exact[0] == "e(7/50)" || component.exact[0] == "e(16/25)";
  EXPECT_TRUE(found);
}

TEST(MagneticRepresentationTest, FreeParametersStayInThePrintedPhases) {
  Wavevector k;
  parse_component("0", 0, k);
  parse_component("u", 1, k);
  parse_component("0", 2, k);
  const Site mn{"Mn", vector_of("1/2", "0", "0"), {}};
  const WavevectorModes modes = wavevector_modes(
      std::make_shared<SymmetryTables>(SpaceGroup::from_hall_number(294)), k, std::span(&mn, 1));
  const MagneticRepresentation& site = modes.sites[0];
  const std::vector<PrintedComponent> row =
      printed_row(modes.little_group, site.suborbits()[0], site.copies()[0], 0);
  bool symbolic = false;
  for (const PrintedComponent& component : row)
    symbolic = symbolic || component.exact[0].find('u') != std::string::npos;
  EXPECT_TRUE(symbolic);
}

}  // namespace
}  // namespace spinsieve
