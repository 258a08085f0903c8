#include "arrangement/bulk_properties.hpp"

#include <algorithm>
#include <map>
#include <random>
#include <set>
#include <string>
#include <vector>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "arrangement/magnetic_group.hpp"
#include "exact/error.hpp"

namespace spinsieve {
namespace {

std::vector<IntMatrix> rotations(std::span<const PrimedRotation> operations) {
  std::vector<IntMatrix> result;
  for (const auto& operation : operations)
    if (std::ranges::find(result, operation.rotation) == result.end())
      result.push_back(operation.rotation);
  return result;
}

/// Properties of a tabulated group whose parent has the same rotations.
BulkProperties properties_of(const TabulatedPointGroup& row) {
  return bulk_properties(MagneticPointGroup(row.operations), rotations(row.operations));
}

const TabulatedPointGroup& tabulated(const std::string& symbol) {
  const auto groups = magnetic_point_groups();
  const auto found = std::ranges::find(groups, symbol, &TabulatedPointGroup::symbol);
  if (found == groups.end()) throw std::logic_error("no point group " + symbol);
  return *found;
}

TEST(MagneticPointGroupTest, ThereAre32And32And58) {
  std::map<int, int> count;
  std::set<std::string> symbols;
  for (const auto& row : magnetic_point_groups()) {
    ++count[row.type];
    symbols.insert(row.symbol);
    SCOPED_TRACE(row.symbol);
    const MagneticPointGroup group(row.operations);  // also: no two rows are confused
    EXPECT_EQ(group.symbol(), row.symbol);
    // Type by its definition.
    const auto primed = std::ranges::count(row.operations, true, &PrimedRotation::primed);
    const bool grey =
        std::ranges::find(row.operations, PrimedRotation{Operation{}.rotation, true}) !=
        row.operations.end();
    EXPECT_EQ(row.type, primed == 0 ? 1 : grey ? 2 : 3);
  }
  // Bradley & Cracknell 1972, ch. 7.
  EXPECT_EQ(count, (std::map<int, int>{{1, 32}, {2, 32}, {3, 58}}));
  EXPECT_EQ(symbols.size(), 122U);
}

TEST(MagneticPointGroupTest, OrdersAreThoseOfTheCrystalClasses) {
  const struct {
    const char* symbol;
    std::size_t order;
  } cases[] = {// International Tables A (2016), 3.2.1: orders of the crystal classes.
               {"1", 1},        {"2/m'", 4}, {"m'm'm'", 8},  {"4'/mm'm", 16}, {"-3'm'", 12},
               {"6'/mmm'", 24}, {"23", 12},  {"m'-3'm", 48}, {"m-3m1'", 96}};
  for (const auto& [symbol, order] : cases) {
    SCOPED_TRACE(symbol);
    EXPECT_EQ(tabulated(symbol).operations.size(), order);
  }
}

TEST(MagneticPointGroupTest, RefusesWhatIsNoGroup) {
  const std::vector<PrimedRotation> operations = {{}, {parse_operation("-y,x,z").rotation, false}};
  EXPECT_THAT(
      [&] { MagneticPointGroup{operations}; },
      ::testing::ThrowsMessage<Error>("the 2 rotations given are not a magnetic point group"));
}

TEST(BulkPropertiesTest, CountsOfGroupsAreThePublishedOnes) {
  int ferromagnetic = 0;
  int pyroelectric = 0;
  int both = 0;
  int magnetoelectric = 0;
  int piezomagnetic = 0;
  for (const auto& row : magnetic_point_groups()) {
    const BulkProperties properties = properties_of(row);
    ferromagnetic += properties.net_moment.allowed() ? 1 : 0;
    pyroelectric += properties.polarisation.allowed() ? 1 : 0;
    both += properties.net_moment.allowed() && properties.polarisation.allowed() ? 1 : 0;
    magnetoelectric += properties.linear_magnetoelectric.allowed() ? 1 : 0;
    piezomagnetic += properties.piezomagnetic.allowed() ? 1 : 0;
  }
  // Borovik-Romanov & Grimmer, International Tables D (2003), 1.5; Schmid 1973 for those that
  // allow both (all from memory).
  EXPECT_EQ(ferromagnetic, 31);
  EXPECT_EQ(pyroelectric, 31);
  EXPECT_EQ(both, 13);
  EXPECT_EQ(magnetoelectric, 58);
  EXPECT_EQ(piezomagnetic, 66);
}

// The number of free components is the mean character, whatever the frame.
TEST(BulkPropertiesTest, FreeComponentsAreTheMeanCharacter) {
  for (const auto& row : magnetic_point_groups()) {
    SCOPED_TRACE(row.symbol);
    int moment = 0;
    int dipole = 0;
    int electric = 0;
    int stress = 0;
    for (const auto& [R, primed] : row.operations) {
      const int sign = determinant(R) * (primed ? -1 : 1);
      const int t = trace(R);
      moment += sign * t;
      dipole += t;
      electric += sign * t * t;
      stress += sign * t * (t * t + trace(product(R, R))) / 2;
    }
    const int order = static_cast<int>(row.operations.size());
    const BulkProperties properties = properties_of(row);
    EXPECT_EQ(static_cast<int>(properties.net_moment.independent) * order, moment);
    EXPECT_EQ(static_cast<int>(properties.polarisation.independent) * order, dipole);
    EXPECT_EQ(static_cast<int>(properties.linear_magnetoelectric.independent) * order, electric);
    EXPECT_EQ(static_cast<int>(properties.piezomagnetic.independent) * order, stress);
  }
}

TEST(BulkPropertiesTest, FormsAreThePublishedOnes) {
  const struct {
    const char* symbol;
    const char* moment;
    const char* magnetoelectric;
    const char* source;
  } cases[] = {
      {"-3'm'", "(0,0,0)", "[xx 0 0; 0 xx 0; 0 0 zz]", "Dzyaloshinskii 1959: Cr2O3 (from memory)"},
      {"m'm'm'", "(0,0,0)", "[xx 0 0; 0 yy 0; 0 0 zz]", "Rivera 1994 (from memory)"},
      {"m'-3'm'", "(0,0,0)", "[xx 0 0; 0 xx 0; 0 0 xx]", "Rivera 1994 (from memory)"},
      {"2/m'", "(0,0,0)", "[xx 0 xz; 0 yy 0; zx 0 zz]", "Rivera 1994 (from memory)"},
      {"2'/m", "(0,0,0)", "[0 xy 0; yx 0 yz; 0 zy 0]", "Rivera 1994 (from memory)"},
      {"4/m'", "(0,0,0)", "[xx xy 0; -xy xx 0; 0 0 zz]", "Rivera 1994 (from memory)"},
      {"4'/m'", "(0,0,0)", "[xx xy 0; xy -xx 0; 0 0 0]", "Rivera 1994 (from memory)"},
      {"-1'", "(0,0,0)", "[xx xy xz; yx yy yz; zx zy zz]", "Rivera 1994 (from memory)"},
      {"6/m'", "(0,0,0)", "[xx xy 0; -xy xx 0; 0 0 zz]", "Rivera 1994 (from memory)"},
      {"6'", "(0,0,0)", "[0 0 0; 0 0 0; 0 0 0]", "Rivera 1994 (from memory)"},
      {"2/m", "(0,my,0)", "[0 0 0; 0 0 0; 0 0 0]", "by hand: an axial vector along the axis"},
      {"2'/m'", "(mx,0,mz)", "[0 0 0; 0 0 0; 0 0 0]", "by hand: an axial vector in the mirror"},
      {"m'm'm", "(0,0,mz)", "[0 0 0; 0 0 0; 0 0 0]", "by hand"},
      {"6/mm'm'", "(0,0,mz)", "[0 0 0; 0 0 0; 0 0 0]", "by hand"},
      {"m-3m1'", "(0,0,0)", "[0 0 0; 0 0 0; 0 0 0]", "by hand: time reversal forbids both"},
  };
  for (const auto& [symbol, moment, magnetoelectric, source] : cases) {
    SCOPED_TRACE(std::string(symbol) + ", " + source);
    const BulkProperties properties = properties_of(tabulated(symbol));
    EXPECT_EQ(properties.magnetic_point_group, symbol);
    EXPECT_EQ(to_string(properties.net_moment), moment);
    EXPECT_EQ(to_string(properties.linear_magnetoelectric), magnetoelectric);
    EXPECT_EQ(properties.frame, "x || a, z || c*");
  }
}

TEST(BulkPropertiesTest, PiezomagneticFormsAreThePublishedOnes) {
  // Borovik-Romanov 1960: CoF2 and MnF2, 4'/mmm': only M_z(σ_xy) and M_x(σ_yz) = M_y(σ_xz). In
  // 4'/mm'm the axes turn by 45°: M_x(σ_xz) = −M_y(σ_yz), M_z(σ_xx) = −M_z(σ_yy) (from memory).
  auto rotated = tabulated("4'/mm'm");
  EXPECT_EQ(to_string(properties_of(rotated).piezomagnetic),
            "[0 0 0 0 xxz 0; 0 0 0 -xxz 0 0; zxx -zxx 0 0 0 0]");
  // The same group with its mirrors exchanged: axes a + b, b - a.
  std::vector<PrimedRotation> operations;
  for (const char* text : {"-y,x,z'", "x,y,-z", "-x,y,z"}) {
    std::string generator = text;
    const bool primed = generator.back() == '\'';
    if (primed) generator.pop_back();
    operations.push_back({parse_operation(generator).rotation, primed});
  }
  std::vector<PrimedRotation> closed = {PrimedRotation{}};
  for (std::size_t i = 0; i < closed.size(); ++i)
    for (const auto& g : operations) {
      const PrimedRotation next{product(closed[i].rotation, g.rotation),
                                closed[i].primed != g.primed};
      if (std::ranges::find(closed, next) == closed.end()) closed.push_back(next);
    }
  const auto fluoride = bulk_properties(MagneticPointGroup(closed), rotations(closed));
  EXPECT_EQ(to_string(fluoride.piezomagnetic), "[0 0 0 xyz 0 0; 0 0 0 0 xyz 0; 0 0 0 0 0 zxy]");
}

/// {R} on axes that are the columns of X: X⁻¹ R X.
std::vector<PrimedRotation> on_axes(std::span<const PrimedRotation> operations,
                                    const IntMatrix& X) {
  std::vector<PrimedRotation> result;
  for (const auto& [R, primed] : operations)
    result.push_back({product(inverse(X), product(R, X)), primed});
  return result;
}

TEST(BulkPropertiesTest, NothingDependsOnTheAxesButTheForm) {
  std::mt19937 random(122);
  for (const auto& row : magnetic_point_groups()) {
    SCOPED_TRACE(row.symbol);
    IntMatrix X = Operation{}.rotation;
    for (int step = 0; step < 4; ++step) {
      const std::size_t i = random() % 3;
      const std::size_t j = (i + 1 + random() % 2) % 3;
      const int n = static_cast<int>(random() % 3) - 1;
      for (std::size_t k = 0; k < 3; ++k) X[i][k] += n * X[j][k];
    }
    const auto moved = on_axes(row.operations, X);
    const MagneticPointGroup group(moved);
    EXPECT_EQ(group.symbol(), row.symbol);
    const BulkProperties here = properties_of(row);
    const BulkProperties there = bulk_properties(group, rotations(moved));
    EXPECT_EQ(there.net_moment.independent, here.net_moment.independent);
    EXPECT_EQ(there.polarisation.independent, here.polarisation.independent);
    EXPECT_EQ(there.linear_magnetoelectric.independent, here.linear_magnetoelectric.independent);
    EXPECT_EQ(there.piezomagnetic.independent, here.piezomagnetic.independent);
  }
}

TEST(BulkPropertiesTest, RhombohedralAxesHaveAFrameOfTheirOwn) {
  std::vector<PrimedRotation> operations;
  for (const char* text : {"x,y,z", "z,x,y", "y,z,x", "-y,-x,-z", "-z,-y,-x", "-x,-z,-y"})
    for (const int sign : {1, -1}) {  // -3'm': the inversion is primed
      PrimedRotation operation{parse_operation(text).rotation, sign < 0};
      if (sign < 0)
        for (auto& line : operation.rotation)
          for (int& x : line) x = -x;
      operations.push_back(operation);
    }
  const auto properties = bulk_properties(MagneticPointGroup(operations), rotations(operations));
  EXPECT_EQ(properties.magnetic_point_group, "-3'm'");
  EXPECT_EQ(to_string(properties.linear_magnetoelectric), "[xx 0 0; 0 xx 0; 0 0 zz]");
  EXPECT_THAT(properties.frame, ::testing::HasSubstr("z || [1 1 1]"));
}

// A rotation in the frame must be orthogonal, and the frame must be that of the real cell: the
// twofold axis along a + b of a cell with a = b is not along a face of a cube.
TEST(CrystalFrameTest, RotationsAreOrthogonalOnAnyAxes) {
  std::mt19937 random(32);
  for (const auto& row : magnetic_point_groups()) {
    SCOPED_TRACE(row.symbol);
    IntMatrix X = Operation{}.rotation;
    for (int step = 0; step < 4; ++step) {
      const std::size_t i = random() % 3;
      const std::size_t j = (i + 1 + random() % 2) % 3;
      for (std::size_t k = 0; k < 3; ++k) X[i][k] += X[j][k];
    }
    const auto moved = rotations(on_axes(row.operations, X));
    const CrystalFrame frame(moved);
    for (const auto& R : moved) {
      const SurdMatrix C = frame.cartesian(R);
      for (std::size_t i = 0; i < 3; ++i)
        for (std::size_t j = 0; j < 3; ++j) {
          Surd sum;
          for (std::size_t k = 0; k < 3; ++k) sum = sum + C[i][k] * C[j][k];
          EXPECT_EQ(sum, Surd(Fraction(i == j ? 1 : 0)));
        }
    }
  }
  const CrystalFrame oblique(std::vector{Operation{}.rotation, parse_operation("y,x,-z").rotation});
  EXPECT_EQ(oblique.text(), "x || [0 0 1], y || [1 1 0]");
}

TEST(BulkPropertiesTest, MomentsAndPolarisationInALowerGroupOfAHexagonalParent) {
  // By hand: a twofold axis along [120], perpendicular to a, keeps a moment and a polarisation
  // along it; in Cartesian axes it is y.
  const auto parent = rotations(tabulated("6/mmm").operations);
  const std::vector<PrimedRotation> operations = {{},
                                                  {parse_operation("-x+y,y,-z").rotation, false}};
  const auto properties = bulk_properties(MagneticPointGroup(operations), parent);
  EXPECT_EQ(to_string(properties.net_moment), "(mx,2mx,0)");
  EXPECT_EQ(to_string(properties.polarisation), "(px,2px,0)");
  EXPECT_TRUE(properties.polarisation_newly_allowed);
  EXPECT_EQ(to_string(properties.linear_magnetoelectric), "[xx 0 xz; 0 yy 0; zx 0 zz]");

  // By hand: turned by 60°, about [010], the quadratic form in the plane mixes with √3.
  const std::vector<PrimedRotation> turned = {{}, {parse_operation("-x,-x+y,-z").rotation, false}};
  const auto oblique = bulk_properties(MagneticPointGroup(turned), parent);
  EXPECT_EQ(to_string(oblique.net_moment), "(0,my,0)");
  // The axis is u = (-1/2, √3/2): R x = 2u(u·x) − x; α_zx, α_zy ⟂ u: zy = zx/√3.
  EXPECT_EQ(oblique.linear_magnetoelectric.entries[7], "1/3√3zx");

  const auto polar = rotations(tabulated("6mm").operations);
  EXPECT_FALSE(bulk_properties(MagneticPointGroup(tabulated("6m'm'").operations), polar)
                   .polarisation_newly_allowed);
}

}  // namespace
}  // namespace spinsieve
