#include "scattering/intensity_form.hpp"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "supercell.hpp"

namespace spinsieve {
namespace {

using test::box_pattern;
using test::place_moments;
using test::random_field;

MagneticSite site(const char* label, const char* ion, const FractionVector& position,
                  double b_iso = 0.4, double occupancy = 1) {
  MagneticSite result;
  result.site.label = label;
  result.site.position = position;
  result.ion.ion = parse_ion(ion);
  result.displacement.b_iso = b_iso;
  result.occupancy = occupancy;
  return result;
}

struct SupercellCase {
  const char* name;
  const char* group;
  Cell cell;
  std::vector<MagneticSite> sites;
  FractionVector k;
  std::array<int, 3> size;
  double q_max;
};

std::vector<SupercellCase> supercell_cases() {
  const Fraction half(1, 2);
  const std::vector<MagneticSite> perovskite = {
      site("Fe", "Fe3+", {0, 0, half}),
      site("Er", "Er3+", {Fraction(3, 50), Fraction(1, 4), Fraction(1, 50)}, 0.2, 0.8)};
  const std::vector<MagneticSite> general = {
      site("M", "Mn3+", {Fraction(1, 10), Fraction(3, 20), Fraction(7, 25)})};
  const std::vector<MagneticSite> origin = {site("M", "Mn2+", {0, 0, 0})};
  return {
      {"k = 0", "P n m a", Cell(5.6, 7.6, 5.3, 90, 90, 90), perovskite, {}, {1, 1, 1}, 4},
      {"zone boundary",
       "P n m a",
       Cell(5.6, 7.6, 5.3, 90, 90, 90),
       perovskite,
       {half, 0, half},
       {2, 1, 2},
       3},
      {"rational like an incommensurate one",
       "P n m a",
       Cell(5.6, 7.6, 5.3, 90, 90, 90),
       perovskite,
       {0, Fraction(2, 7), 0},
       {1, 7, 1},
       2.5},
      {"k where -k is another arm, no centre",
       "P 21 3",
       Cell(6, 6, 6, 90, 90, 90),
       general,
       {Fraction(1, 5), Fraction(1, 5), Fraction(1, 5)},
       {5, 5, 5},
       1.8},
      {"triclinic",
       "P 1",
       Cell(5, 6, 7, 80, 95, 105),
       general,
       {Fraction(1, 3), Fraction(1, 4), Fraction(-1, 2)},
       {3, 4, 2},
       2.5},
      {"body centred",
       "I 4/m m m",
       Cell(3.3, 3.3, 8.8, 90, 90, 90),
       origin,
       {0, 0, Fraction(2, 7)},
       {1, 1, 7},
       4},
      {"face centred, L",
       "F m -3 m",
       Cell(4.43, 4.43, 4.43, 90, 90, 90),
       origin,
       {half, half, half},
       {2, 2, 2},
       6},
      {"face centred, W: 2k is no lattice vector",
       "F m -3 m",
       Cell(4.43, 4.43, 4.43, 90, 90, 90),
       origin,
       {half, 0, 1},
       {2, 2, 2},
       6},
      {"rhombohedral, hexagonal axes",
       "R -3 c",
       Cell(5, 5, 13.7, 90, 90, 120),
       {site("M", "Cr3+", {0, 0, Fraction(7, 20)})},
       {0, half, 1},
       {1, 2, 2},
       2.6},
      {"hexagonal, K",
       "P 63/m m c",
       Cell(7, 7, 6, 90, 90, 120),
       origin,
       {Fraction(1, 3), Fraction(1, 3), 0},
       {3, 3, 1},
       2.5},
  };
}

TEST(IntensityFormTest, LinesEqualDirectSumsOverASupercell) {
  std::mt19937 random(20250102);
  for (const SupercellCase& c : supercell_cases()) {
    SCOPED_TRACE(c.name);
    const SpaceGroup group = parse_space_group(c.group);
    const MagneticScatterers scatterers(c.cell, group, c.sites);
    MomentField field;
    field.parameters = 3;
    field.arms = {random_field(group, c.sites, c.k, field.parameters, random)};
    const std::vector<double> parameters = {0.7, -1.3, 0.4};
    const auto moments = place_moments(c.cell, group, field, parameters, c.size);
    std::map<long, double> brute = box_pattern(scatterers, moments, c.size, c.q_max);

    const std::vector<Arm> arms = {{c.k, 0}};
    const ReflectionTable table(c.cell, group, arms, 0, c.q_max);
    std::vector<std::size_t> lines(table.lines().size());
    for (std::size_t i = 0; i < lines.size(); ++i) lines[i] = i;
    const std::vector<IntensityForm> forms = line_forms(scatterers, field, table, lines);
    ASSERT_GT(forms.size(), 5U);
    const Eigen::VectorXd vector = Eigen::Map<const Eigen::VectorXd>(parameters.data(), 3);
    double largest = 0;
    for (const auto& [q, intensity] : brute) largest = std::max(largest, intensity);
    for (std::size_t i = 0; i < forms.size(); ++i) {
      const double q = table.lines()[i].q;
      SCOPED_TRACE("q = " + std::to_string(q) + " " + table.label(table.lines()[i]));
      double expected = 0;
      for (long key = std::lround(q * 1e7) - 1; key <= std::lround(q * 1e7) + 1; ++key) {
        expected += brute[key];
        brute.erase(key);
      }
      EXPECT_NEAR(forms[i].mu_b2(vector), expected, 1e-10 * largest);
    }
    for (const auto& [q, intensity] : brute)  // what is no satellite scatters nothing
      EXPECT_NEAR(intensity, 0, 1e-10 * largest) << "q = " << static_cast<double>(q) * 1e-7;
  }
}

// Story: the satellite hkl - k carries S and hkl + k carries S*. With the two exchanged even the
// powder lines change when S has no centre.
TEST(IntensityFormTest, ExchangedSatellitesWouldBeSeen) {
  std::mt19937 random(7);
  const SupercellCase c = supercell_cases()[4];
  const SpaceGroup group = parse_space_group(c.group);
  const MagneticScatterers scatterers(c.cell, group, c.sites);
  MomentField field;
  field.parameters = 1;
  FourierField arm = random_field(group, {c.sites[0], c.sites[0]}, c.k, 1, random);
  arm.atoms[1] = {0, {Fraction(2, 5), Fraction(1, 3), Fraction(1, 7)}};
  field.arms = {arm};
  MomentField exchanged = field;
  for (auto& component : exchanged.arms[0].components)
    for (auto& entry : component) entry = std::conj(entry);
  const std::vector<Arm> arms = {{c.k, 0}};
  const ReflectionTable table(c.cell, group, arms, 0, c.q_max);
  std::vector<std::size_t> lines(table.lines().size());
  for (std::size_t i = 0; i < lines.size(); ++i) lines[i] = i;
  const auto right = line_forms(scatterers, field, table, lines);
  const auto wrong = line_forms(scatterers, exchanged, table, lines);
  double difference = 0;
  for (std::size_t i = 0; i < lines.size(); ++i)
    difference = std::max(difference, std::abs(right[i].mu_b2()(0, 0) - wrong[i].mu_b2()(0, 0)));
  EXPECT_GT(difference, 0.1);
  // hkl - k itself, against a box.
  const auto moments = place_moments(c.cell, group, field, {1.0}, c.size);
  const double cells = c.size[0] * c.size[1] * c.size[2];
  for (const int sign : {-1, 1}) {
    Reflection reflection;
    reflection.hkl = {1, 0, 1};
    reflection.k_sign = sign;
    const Vector3 hkl = reciprocal_components(reflection, c.k);
    reflection.q = c.cell.scattering_vector(hkl);
    reflection.q_length = c.cell.q(hkl);
    const double expected = test::box_intensity(scatterers, moments, hkl, cells);
    const double parameter = 1;
    const ComplexVector3 F =
        magnetic_structure_factor(scatterers, arm, std::span(&parameter, 1), reflection);
    EXPECT_NEAR(squared_length(perpendicular(F, reflection.q)), expected, 1e-10 * expected);
    const auto form = reflection_forms(scatterers, field, std::span(&reflection, 1));
    EXPECT_NEAR(form[0].mu_b2()(0, 0), expected, 1e-10 * expected);
  }
}

TEST(IntensityFormTest, FastFormsEqualThePlainSum) {
  std::mt19937 random(11);
  for (SupercellCase c : supercell_cases()) {
    SCOPED_TRACE(c.name);
    const SpaceGroup group = parse_space_group(c.group);
    if (group.number() == 62) {  // anisotropic displacement on the general part
      c.sites[0].displacement.b_iso = 0;
      c.sites[0].displacement.u_ij = {0.01, 0.012, 0.008, 0.002, -0.001, 0.003};
    }
    const MagneticScatterers scatterers(c.cell, group, c.sites);
    MomentField field;
    field.parameters = 5;
    field.arms = {random_field(group, c.sites, c.k, field.parameters, random)};
    const std::vector<Arm> arms = {{c.k, 0}};
    const ReflectionTable table(c.cell, group, arms, 0.1, 3 * c.q_max / 2);
    Eigen::VectorXd vector(5);
    vector << 0.3, -0.8, 1.2, 0.1, -0.5;
    std::vector<Reflection> all;
    for (const PowderLine& line : table.lines())
      for (const Reflection& reflection : table.all_reflections(line)) all.push_back(reflection);
    const auto forms = reflection_forms(scatterers, field, all);
    for (std::size_t i = 0; i < all.size(); ++i) {
      const double plain = squared_length(perpendicular(
          magnetic_structure_factor(scatterers, field.arms[0], std::span(vector.data(), 5), all[i]),
          all[i].q));
      EXPECT_NEAR(forms[i].mu_b2(vector), plain, 1e-11 * (1 + plain)) << table.label(all[i]);
    }
  }
}

TEST(IntensityFormTest, AnisotropicDisplacementFollowsTheAtoms) {
  // Intensities of equivalent reflections stay equal only when U turns with each atom.
  const SpaceGroup group = parse_space_group("P n m a");
  const Cell cell(5.6, 7.6, 5.3, 90, 90, 90);
  std::vector<MagneticSite> sites = {site("M", "Fe3+", {0, 0, Fraction(1, 2)}, 0)};
  sites[0].displacement.u_ij = {0.02, 0.05, 0.01, 0.012, -0.004, 0.015};
  const MagneticScatterers scatterers(cell, group, sites);
  FourierField field;
  field.self_conjugate = true;
  const Orbit orbit(group, sites[0].site.position);
  for (const OrbitAtom& atom : orbit.atoms()) {
    field.atoms.push_back({0, atom.position});
    field.components.push_back({0, 0, 1});  // a ferromagnet: |F_z|² has the full symmetry
  }
  const double one = 1;
  const auto f_z = [&](std::array<int, 3> hkl) {
    Reflection r;
    r.hkl = hkl;
    const Vector3 h = reciprocal_components(r, field.k);
    r.q = cell.scattering_vector(h);
    r.q_length = cell.q(h);
    return std::norm(magnetic_structure_factor(scatterers, field, std::span(&one, 1), r)[2]);
  };
  const double first = f_z({1, 2, 1});
  EXPECT_GT(first, 0.1);
  EXPECT_NEAR(f_z({-1, 2, 1}), first, 1e-12);
  EXPECT_NEAR(f_z({1, -2, 1}), first, 1e-12);
  EXPECT_NEAR(f_z({1, 2, -1}), first, 1e-12);
  // By hand: atom 1 at (0, 0, 1/2) with h U h of (1, 2, 1).
  const DebyeWaller damping(sites[0].displacement, cell, group, sites[0].site);
  const double a = 1 / 5.6, b = 1 / 7.6, c = 1 / 5.3;
  const double sum = 0.02 * a * a + 4 * 0.05 * b * b + 0.01 * c * c + 2 * (2 * 0.012 * a * b) +
                     2 * (-0.004 * a * c) + 2 * (2 * 0.015 * b * c);
  EXPECT_NEAR(damping.anisotropic_factor({1, 2, 1}),
              std::exp(-2 * std::numbers::pi * std::numbers::pi * sum), 1e-13);
}

TEST(IntensityFormTest, DisplacementAndOccupancyErrors) {
  using testing::HasSubstr;
  using testing::ThrowsMessage;
  const SpaceGroup group = parse_space_group("P n m a");
  const Cell cell(5.6, 7.6, 5.3, 90, 90, 90);
  const auto build = [&](const MagneticSite& s) {
    return [&group, &cell, s] { MagneticScatterers(cell, group, std::span(&s, 1)); };
  };
  EXPECT_THAT(build(site("M", "Fe3+", {0, 0, 0}, -0.1)),
              ThrowsMessage<Error>(HasSubstr("b_iso -0.1")));
  EXPECT_THAT(build(site("M", "Fe3+", {0, 0, 0}, 0, 1.2)),
              ThrowsMessage<Error>(HasSubstr("occupancy 1.2")));
  MagneticSite bad = site("M", "Fe3+", {0, Fraction(1, 4), 0}, 0);  // on a mirror: U12 = U23 = 0
  bad.displacement.u_ij = {0.01, 0.01, 0.01, 0.005, 0, 0};
  EXPECT_THAT(build(bad), ThrowsMessage<Error>(HasSubstr("breaks the symmetry")));
  bad.displacement.u_ij = {0.01, -0.01, 0.01, 0, 0, 0};
  EXPECT_THAT(build(bad), ThrowsMessage<Error>(HasSubstr("not positive definite")));
}

}  // namespace
}  // namespace spinsieve
