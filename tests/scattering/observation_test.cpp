#include "scattering/observation.hpp"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "scattering/constants.hpp"
#include "scattering/geometry.hpp"
#include "supercell.hpp"

namespace spinsieve {
namespace {

using testing::ElementsAre;
using testing::HasSubstr;
using testing::IsEmpty;
using testing::ThrowsMessage;

const double turn = 2 * std::numbers::pi;

/// A primitive tetragonal lattice with k = 0: lines at 2π √((h² + k²)/16 + l²/25).
struct Tetragonal {
  SpaceGroup group = parse_space_group("P 4/m m m");
  Cell cell{4, 4, 5, 90, 90, 90};
  std::vector<Arm> arms{{FractionVector{}, 0}};
  std::vector<MagneticSite> sites;
  double q(int h, int k, int l) const {
    return turn * std::sqrt((h * h + k * k) / 16.0 + l * l / 25.0);
  }
  Tetragonal() {
    MagneticSite site;
    site.site.label = "M1";
    site.ion.ion = parse_ion("Mn2+");
    sites = {site};
  }
  MomentField along(std::initializer_list<FourierField::Component> directions) const {
    MomentField field;
    field.parameters = directions.size();
    FourierField arm;
    arm.self_conjugate = true;
    arm.atoms = {{0, {}}};
    arm.components = directions;
    field.arms = {arm};
    return field;
  }
};

LinePosition at(double q, double relative_width = 0.008) {
  LinePosition position;
  position.q = q;
  position.q_low = q * (1 - relative_width / 2);
  position.q_high = q * (1 + relative_width / 2);
  position.text = "q " + std::to_string(q).substr(0, 5);
  return position;
}

ObservedLine line(double q, double intensity, double sigma) {
  ObservedLine result;
  result.position = at(q);
  result.intensity = intensity;
  result.sigma = sigma;
  return result;
}

TEST(ObservationPlanTest, OverlappingWindowsMergeAndAdd) {
  const Tetragonal t;
  Measurement m;
  m.lines = {line(t.q(1, 0, 0), 100, 3), line(t.q(1, 0, 0) * 1.005, 50, 4),
             line(t.q(1, 0, 1), 20, 2)};
  Absence absence;
  absence.position = at(t.q(1, 0, 1) * 1.006);
  absence.below = 3.29;
  m.absences = {absence};
  const ObservationPlan plan(t.cell, t.group, t.arms, m);
  ASSERT_EQ(plan.groups().size(), 2U);
  const ObservationGroup& first = plan.groups()[0];
  EXPECT_THAT(first.lines, ElementsAre(0, 1));
  EXPECT_DOUBLE_EQ(first.observed, 150);
  EXPECT_DOUBLE_EQ(first.sigma, 5);
  EXPECT_EQ(first.contents, "(1 0 0) ×4");
  EXPECT_EQ(first.label, "q 1.570 + q 1.578");
  const ObservationGroup& second = plan.groups()[1];
  EXPECT_THAT(second.absences, ElementsAre(0));
  EXPECT_EQ(second.kind, PointKind::line);
  EXPECT_NEAR(second.sigma, std::hypot(2, 2), 1e-12);  // 3.29/1.645 = 2
  // (0 0 1) lies below both windows and nobody looked there.
  ASSERT_EQ(plan.unmeasured().size(), 1U);
  EXPECT_NEAR(plan.table().lines()[plan.unmeasured()[0]].q, t.q(0, 0, 1), 1e-12);
}

TEST(ObservationPlanTest, ScannedRangesTurnUnlistedLinesIntoAbsences) {
  const Tetragonal t;
  Measurement m;
  m.lines = {line(t.q(1, 0, 0), 100, 3)};
  m.scanned = {{1.0, 2.3, 6.58, {}}};
  const ObservationPlan plan(t.cell, t.group, t.arms, m);
  // In 1.0 … 2.3: (0 0 1) 1.257, (1 0 0) 1.571 listed, (1 0 1) 2.012, (1 1 0) 2.221.
  ASSERT_EQ(plan.groups().size(), 4U);
  EXPECT_EQ(plan.groups()[0].kind, PointKind::absence);
  EXPECT_EQ(plan.groups()[0].contents, "(0 0 1) ×2");
  EXPECT_EQ(plan.groups()[0].label, "scanned, (0 0 1) ×2");
  EXPECT_NEAR(plan.groups()[0].sigma, 4, 1e-12);
  EXPECT_EQ(plan.groups()[1].kind, PointKind::line);
  EXPECT_EQ(plan.groups()[2].contents, "(1 0 1) ×8");
  EXPECT_EQ(plan.groups()[3].contents, "(1 1 0) ×4");
  EXPECT_THAT(plan.unmeasured(), IsEmpty());
}

TEST(ObservationPlanTest, UnresolvedComputedLinesShareOneAbsence) {
  Tetragonal t;
  t.cell = Cell(4, 4, 4.01, 90, 90, 90);  // (1 0 0) and (0 0 1) 0.25 % apart
  Measurement m;
  m.scanned = {{1.5, 1.6, 6.58, {}}};
  const ObservationPlan plan(t.cell, t.group, t.arms, m);
  ASSERT_EQ(plan.groups().size(), 1U);
  EXPECT_EQ(plan.groups()[0].contents, "(0 0 1) ×2, (1 0 0) ×4");
  EXPECT_NEAR(plan.groups()[0].sigma, 4, 1e-12);
}

TEST(ObservationPlanTest, OneSidedPoints) {
  const Tetragonal t;
  Measurement m;
  ObservedLine seen;
  seen.position = at(t.q(0, 0, 1));
  seen.above = 16.45;
  ObservedLine foreign = line(t.q(1, 0, 0), 100, 3);
  foreign.foreign = true;
  ObservedLine useless = seen;
  useless.position = at(t.q(1, 0, 1));
  useless.foreign = true;
  m.lines = {seen, foreign, useless};
  const ObservationPlan plan(t.cell, t.group, t.arms, m);
  ASSERT_EQ(plan.groups().size(), 2U);
  EXPECT_EQ(plan.groups()[0].kind, PointKind::at_least);
  EXPECT_NEAR(plan.groups()[0].observed, 16.45, 1e-12);
  EXPECT_NEAR(plan.groups()[0].sigma, 10, 1e-12);
  EXPECT_EQ(plan.groups()[1].kind, PointKind::at_most);
  EXPECT_EQ(plan.unmeasured().size(), 1U);
}

TEST(ObservationPlanTest, PointsHoldBarnTimesLorentzFactor) {
  const Tetragonal t;
  Measurement m;
  m.lines = {line(t.q(1, 0, 0), 100, 3), line(t.q(0, 0, 2), 10, 1)};
  const MagneticScatterers scatterers(t.cell, t.group, t.sites);
  const MomentField field = t.along({{0, 0, 1}, {1, 0, 0}});  // c1 along c, c2 along a
  const auto points = data_points(ObservationPlan(t.cell, t.group, t.arms, m), scatterers, field);
  ASSERT_EQ(points.size(), 2U);
  const double p2 = 0.072653;  // barn per µB²; Bacon, Neutron Diffraction
  const FormFactor f(t.sites[0].ion);
  const double f100 = std::pow(f(t.q(1, 0, 0) / (2 * turn)), 2);
  const double f002 = std::pow(f(t.q(0, 0, 2) / (2 * turn)), 2);
  // By hand: all four {100} see c; only two of them see a. Neither of {002} sees c, both see a.
  EXPECT_NEAR(points[0].form(0, 0), 4 * p2 * f100, 1e-5);
  EXPECT_NEAR(points[0].form(1, 1), 2 * p2 * f100, 1e-5);
  EXPECT_NEAR(points[0].form(0, 1), 0, 1e-12);
  EXPECT_NEAR(points[1].form(0, 0), 0, 1e-12);
  EXPECT_NEAR(points[1].form(1, 1), 2 * p2 * f002, 1e-5);
  m.intensity = IntensityKind::integrated;
  m.geometry = ConstantWavelength{2.4};
  const auto integrated =
      data_points(ObservationPlan(t.cell, t.group, t.arms, m), scatterers, field);
  const double sine = 2.4 / (2 * 4);  // λ/2d of (1 0 0)
  const double lorentz = 1 / (sine * sine * std::cos(std::asin(sine)));
  EXPECT_NEAR(integrated[0].form(0, 0), lorentz * points[0].form(0, 0), 1e-9);
}

TEST(ObservationPlanTest, AWavevectorOfNoArmAddsNothing) {
  // A candidate that orders with one of two wavevectors scatters nothing at the other's lines.
  const Tetragonal t;
  const std::vector<Arm> arms = {{FractionVector{}, 0}, {{0, 0, Fraction(1, 2)}, 1}};
  Measurement m;
  m.lines = {line(turn * 0.5 / 5, 5, 1), line(t.q(1, 0, 0), 100, 3)};
  const ObservationPlan plan(t.cell, t.group, arms, m);
  ASSERT_EQ(plan.groups().size(), 2U);
  EXPECT_EQ(plan.groups()[0].contents, "(0 0 0)+k2 ×2");
  const MagneticScatterers scatterers(t.cell, t.group, t.sites);
  const auto points = data_points(plan, scatterers, t.along({{1, 0, 0}}));
  EXPECT_EQ(points[0].form(0, 0), 0);
  EXPECT_GT(points[1].form(0, 0), 0.01);
}

TEST(ObservationPlanTest, CrystalIntensitiesAverageOverTurnedCopies) {
  // Brute force: turn the whole moment field by every operation (axial vectors), sum |F⊥|² of each
  // copy over a box at the one observed Q, and take the mean.
  struct Case {
    const char* group;
    Cell cell;
    FractionVector position;
    FractionVector k;
    std::array<int, 3> size;
    std::array<int, 3> hkl;
    int k_sign;
  };
  const Fraction third(1, 3);
  const std::vector<Case> cases = {
      {"P 4/m m m",
       Cell(4, 4, 5, 90, 90, 90),
       {},
       {Fraction(1, 4), 0, 0},
       {4, 4, 1},
       {1, 0, 1},
       -1},
      {"P 63 c m",
       Cell(6.1, 6.1, 11.4, 90, 90, 120),
       {Fraction(1, 3), 0, 0},
       {},
       {1, 1, 1},
       {1, 0, 2},
       0},
      {"F m -3 m",
       Cell(4.4, 4.4, 4.4, 90, 90, 90),
       {},
       {Fraction(1, 2), Fraction(1, 2), Fraction(1, 2)},
       {2, 2, 2},
       {2, 0, 0},
       1},
      {"P 21 3",
       Cell(6, 6, 6, 90, 90, 90),
       {Fraction(1, 10), Fraction(1, 7), Fraction(1, 4)},
       {third, third, third},
       {3, 3, 3},
       {0, 1, 1},
       1},
  };
  std::mt19937 random(3);
  for (const Case& c : cases) {
    SCOPED_TRACE(c.group);
    const SpaceGroup group = parse_space_group(c.group);
    MagneticSite site;
    site.site.position = c.position;
    site.ion.ion = parse_ion("Mn2+");
    const std::vector<MagneticSite> sites = {site};
    const MagneticScatterers scatterers(c.cell, group, sites);
    MomentField field;
    field.parameters = 2;
    field.arms = {test::random_field(group, sites, c.k, 2, random)};
    Measurement m;
    m.sample = Sample::single_crystal;
    ObservedLine observed = line(1, 10, 1);
    observed.position.index = ReflectionIndex{c.hkl, c.k_sign, 0};
    m.lines = {observed};
    const std::vector<Arm> arms = {{c.k, 0}};
    const auto points = data_points(ObservationPlan(c.cell, group, arms, m), scatterers, field);
    ASSERT_EQ(points.size(), 1U);
    const std::vector<double> parameters = {0.8, -0.5};
    const auto moments = test::place_moments(c.cell, group, field, parameters, c.size);
    const double cells = c.size[0] * c.size[1] * c.size[2];
    Vector3 Q{};
    for (std::size_t i = 0; i < 3; ++i) Q[i] = c.hkl[i] + c.k_sign * c.k[i].to_double();
    double mean = 0;
    for (const Operation& operation : group.operations()) {
      std::vector<test::PlacedMoment> turned = moments;
      const int proper = determinant(operation.rotation);
      for (test::PlacedMoment& atom : turned) {
        Vector3 position{};
        Vector3 lattice{};
        const Matrix3& inverse = c.cell.fractionalization();
        for (std::size_t i = 0; i < 3; ++i)
          for (std::size_t j = 0; j < 3; ++j) lattice[i] += inverse[i][j] * atom.moment[j];
        Vector3 image{};
        for (std::size_t i = 0; i < 3; ++i) {
          position[i] = operation.translation[i].to_double();
          for (std::size_t j = 0; j < 3; ++j) {
            position[i] += operation.rotation[i][j] * atom.position[j];
            image[i] += proper * operation.rotation[i][j] * lattice[j];
          }
        }
        atom.position = position;
        atom.moment = c.cell.cartesian(image);
      }
      mean +=
          test::box_intensity(scatterers, turned, Q, cells) / static_cast<double>(group.order());
    }
    const Eigen::Vector2d vector(parameters[0], parameters[1]);
    ASSERT_GT(mean, 1e-3);
    EXPECT_NEAR(vector.dot(points[0].form * vector), barn_per_mu_b2 * mean, 1e-10 * mean);
  }
}

TEST(ObservationPlanTest, ErrorsNameTheEntry) {
  const Tetragonal t;
  const auto plan = [&t](const Measurement& m) {
    return [&t, m] { ObservationPlan(t.cell, t.group, t.arms, m); };
  };
  Measurement m;
  m.lines = {line(1.57, 10, 0)};
  EXPECT_THAT(plan(m),
              ThrowsMessage<Error>(HasSubstr("sigma 0.000000 of q 1.570; it must be positive")));
  m.lines = {line(1.57, 10, 1)};
  m.geometry = ConstantWavelength{9};
  EXPECT_THAT(plan(m), ThrowsMessage<Error>(HasSubstr("out of reach of the wavelength")));
  m.geometry = {};
  m.intensity = IntensityKind::integrated;
  EXPECT_THAT(plan(m), ThrowsMessage<Error>(HasSubstr("need the geometry")));
  m.intensity = IntensityKind::lorentz_removed;
  m.resolution = Caglioti{0.1, -0.1, 0.2};
  m.lines[0].position.q_high = 0;
  EXPECT_THAT(plan(m), ThrowsMessage<Error>(HasSubstr("needs a wavelength")));
  m.sample = Sample::single_crystal;
  EXPECT_THAT(plan(m), ThrowsMessage<Error>(HasSubstr("give hkl and k_sign")));
}

TEST(GeometryTest, LorentzFactorsAndWidths) {
  Measurement m;
  m.intensity = IntensityKind::integrated;
  m.geometry = ConstantWavelength{2};
  const auto q = [](double two_theta) {
    return 4 * std::numbers::pi * std::sin(two_theta / 2 * std::numbers::pi / 180) / 2;
  };
  const struct {
    double two_theta, factor;
  } cases[] = {// 1/(sin²θ cosθ); International Tables C 6.2, evaluated by hand calculator
               {20, 33.675037},
               {60, 4.618802},
               {90, 2.828427},
               {120, 2.666667}};
  for (const auto& [two_theta, factor] : cases) {
    EXPECT_NEAR(lorentz_factor(m, q(two_theta)), factor, 1e-6);
    EXPECT_NEAR(two_theta_degrees(m.geometry, q(two_theta)).value(), two_theta, 1e-10);
  }
  m.sample = Sample::single_crystal;
  EXPECT_NEAR(lorentz_factor(m, q(30)), 2, 1e-12);  // 1/sin 30°
  // Buras & Gerward (1975): intensities at one bank fall as d⁴.
  m.sample = Sample::powder;
  m.geometry = Flight{145};
  EXPECT_NEAR(lorentz_factor(m, 1.0) / lorentz_factor(m, 2.0), 16, 1e-9);
  // Caglioti, Paoletti & Ricci (1958): only w = 0.09 at θ = 45°: H = 0.3°, ΔQ/Q = cot 45° · H/2.
  m.geometry = ConstantWavelength{2};
  m.resolution = Caglioti{0, 0, 0.09};
  EXPECT_NEAR(relative_width(m, q(90)), 0.15 * std::numbers::pi / 180, 1e-9);
  m.resolution = Caglioti{0.05, -0.02, 0.04};  // tan 45° = 1: H² = 0.07
  EXPECT_NEAR(relative_width(m, q(90)), std::sqrt(0.07) / 2 * std::numbers::pi / 180, 1e-9);
}

}  // namespace
}  // namespace spinsieve
