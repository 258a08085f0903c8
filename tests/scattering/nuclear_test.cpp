#include "scattering/nuclear.hpp"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "scattering/constants.hpp"
#include "scattering/geometry.hpp"
#include "scattering/peaks.hpp"
#include "scattering/polarised.hpp"
#include "scattering/profile.hpp"

namespace spinsieve {
namespace {

using testing::HasSubstr;
using testing::ThrowsMessage;

const Fraction half(1, 2);

NuclearSite nucleus(const char* element, const FractionVector& position, double b_iso = 0,
                    double occupancy = 1) {
  NuclearSite result;
  result.site.label = element;
  result.site.position = position;
  result.element = element;
  result.displacement.b_iso = b_iso;
  result.occupancy = occupancy;
  return result;
}

MagneticSite magnetic(const char* ion, const FractionVector& position) {
  MagneticSite result;
  result.site.label = ion;
  result.site.position = position;
  result.ion.ion = parse_ion(ion);
  return result;
}

/// Rock salt with manganese: F = 4 (b_Mn ± b_O), textbook.
struct RockSalt {
  SpaceGroup group = parse_space_group("F m -3 m");
  Cell cell{4.44, 4.44, 4.44, 90, 90, 90};
  std::vector<MagneticSite> magnetic_sites{magnetic("Mn2+", {0, 0, 0})};
  std::vector<NuclearSite> others{nucleus("O", {half, half, half})};
  NuclearScatterers nuclei{cell, group, magnetic_sites, others};
};

TEST(NuclearTest, RockSaltByHand) {
  const RockSalt salt;
  const double b_mn = -3.75, b_o = 5.805;  // fm; Rauch & Waschkowski
  EXPECT_NEAR(salt.nuclei.structure_factor({1, 1, 1}).real(), 4 * (b_mn - b_o), 1e-9);
  EXPECT_NEAR(salt.nuclei.structure_factor({2, 0, 0}).real(), 4 * (b_mn + b_o), 1e-9);
  EXPECT_NEAR(salt.nuclei.structure_factor({2, 2, 0}).real(), 4 * (b_mn + b_o), 1e-9);
  const std::vector<Arm> arms = {{FractionVector{}, 0}};
  const ReflectionTable table(salt.cell, salt.group, arms, 0, 3);
  // 8 planes {111}; 1 barn = 100 fm².
  EXPECT_NEAR(salt.nuclei.line_barn(table, table.lines()[0]),
              8 * std::pow(4 * (b_mn - b_o), 2) / 100, 1e-3);
}

TEST(NuclearTest, DisplacementAndOccupancyDamp) {
  const SpaceGroup group = parse_space_group("P m -3 m");
  const Cell cell(4, 4, 4, 90, 90, 90);
  const std::vector<NuclearSite> sites = {nucleus("Fe", {0, 0, 0}, 0.8, 0.5)};
  const NuclearScatterers nuclei(cell, group, {}, sites);
  // By hand: s = 1/(2d) = 1/4 for (2 0 0).
  EXPECT_NEAR(nuclei.structure_factor({2, 0, 0}).real(), 0.5 * 9.45 * std::exp(-0.8 / 16), 1e-9);
}

TEST(NuclearTest, StrongAbsorbersAreReported) {
  const RockSalt salt;
  EXPECT_TRUE(salt.nuclei.warnings().empty());
  const std::vector<NuclearSite> sites = {nucleus("Gd", {0, 0, 0}), nucleus("Gd", {half, 0, 0})};
  const NuclearScatterers nuclei(salt.cell, parse_space_group("P 1"), {}, sites);
  ASSERT_EQ(nuclei.warnings().size(), 1U);
  EXPECT_THAT(nuclei.warnings()[0], HasSubstr("Gd depends strongly"));
}

NuclearLine nuclear_line(double q, double intensity, double sigma) {
  NuclearLine line;
  line.position.q = q;
  line.position.q_low = 0.996 * q;
  line.position.q_high = 1.004 * q;
  line.position.text = "q " + std::to_string(q);
  line.intensity = intensity;
  line.sigma = sigma;
  return line;
}

TEST(NuclearScaleTest, RecoversTheScaleOfComputedLines) {
  const RockSalt salt;
  const std::vector<Arm> arms = {{FractionVector{}, 0}};
  const ReflectionTable table(salt.cell, salt.group, arms, 0, 5);
  Measurement measurement;
  measurement.geometry = ConstantWavelength{1.5};
  measurement.intensity = IntensityKind::integrated;
  const double truth = 37.5;
  const double signs[] = {1, -1, 1};
  double square_sum = 0;
  for (std::size_t i = 0; i < 3; ++i) {
    const double barn = salt.nuclei.line_barn(table, table.lines()[i]) *
                        lorentz_factor(measurement, table.lines()[i].q);
    measurement.nuclear_lines.push_back(nuclear_line(
        table.lines()[i].q, truth * barn * (1 + 0.01 * signs[i]), 0.01 * truth * barn));
    square_sum += 1 / (0.0001 * truth * truth);
  }
  const NuclearScale scale = fit_nuclear_scale(salt.cell, salt.group, salt.nuclei, measurement);
  // By hand: every line weighs the same, so the mean is 1 + 0.01/3 and χ² = (2/3)² + (4/3)² +
  // (2/3)².
  EXPECT_NEAR(scale.scale, truth * (1 + 0.01 / 3), 1e-6);
  EXPECT_NEAR(scale.sigma, 1 / std::sqrt(square_sum), 1e-6);
  EXPECT_NEAR(scale.chi2, 24.0 / 9, 1e-6);
}

TEST(NuclearScaleTest, CrystalReflectionsServeToo) {
  const RockSalt salt;
  Measurement measurement;
  measurement.sample = Sample::single_crystal;
  NuclearLine line =
      nuclear_line(0, 50 * std::norm(salt.nuclei.structure_factor({1, 1, 1})) / 100, 1);
  line.position.index = ReflectionIndex{{1, 1, 1}, 0, 0};
  measurement.nuclear_lines = {line};
  EXPECT_NEAR(fit_nuclear_scale(salt.cell, salt.group, salt.nuclei, measurement).scale, 50, 1e-9);
}

TEST(NuclearScaleTest, ErrorsSayWhatIsMissing) {
  const RockSalt salt;
  Measurement measurement;
  const auto fit = [&] { fit_nuclear_scale(salt.cell, salt.group, salt.nuclei, measurement); };
  EXPECT_THAT(fit, ThrowsMessage<Error>(HasSubstr("without nuclear lines")));
  measurement.nuclear_lines = {nuclear_line(1, 10, 1)};  // below (1 1 1)
  EXPECT_THAT(fit, ThrowsMessage<Error>(HasSubstr("no nuclear line contains a reflection")));
  measurement.nuclear_lines = {nuclear_line(2.4511, -10, 1)};
  EXPECT_THAT(fit, ThrowsMessage<Error>(HasSubstr("it must be positive")));
}

TEST(PeaksTest, MagneticAndNuclearLinesTogether) {
  const RockSalt salt;
  const MagneticScatterers scatterers(salt.cell, salt.group, salt.magnetic_sites);
  MomentField field;
  field.parameters = 1;
  FourierField& arm = field.arms.emplace_back();
  arm.k = {half, half, half};
  arm.self_conjugate = true;
  arm.atoms = {{0, {}}};
  arm.components = {{1 / std::sqrt(2.0), -1 / std::sqrt(2.0), 0}};
  const std::vector<Arm> arms = {{arm.k, 0}};
  const double five = 5;
  const auto lines =
      peaks(scatterers, &salt.nuclei, field, std::span(&five, 1), arms, ConstantWavelength{1.5}, 3);
  ASSERT_GE(lines.size(), 3U);
  EXPECT_EQ(lines[0].label, "(0 0 0)+k ×2");
  EXPECT_EQ(lines[0].indices.size(), 2U);
  EXPECT_NEAR(lines[0].d, 2 * 4.44 / std::sqrt(3.0), 1e-9);
  EXPECT_NEAR(lines[0].two_theta_degrees.value(),
              2 * std::asin(1.5 * std::sqrt(3.0) / (4 * 4.44)) * 180 / std::numbers::pi, 1e-9);
  // By hand: moment 5 µB across Q, four atoms in phase, two reflections, ⟨j0⟩ of Mn2+.
  const double f = FormFactor(salt.magnetic_sites[0].ion)(std::sqrt(3.0) / (4 * 4.44));
  EXPECT_NEAR(lines[0].f_perp_squared, 2 * std::pow(4 * 5 * f, 2), 1e-9);
  EXPECT_NEAR(lines[0].magnetic_barn, 0.072653 * lines[0].f_perp_squared, 1e-3);
  EXPECT_EQ(lines[0].nuclear_barn.value(), 0);
  double nuclear = 0;
  for (const Peak& peak : lines)
    if (std::abs(peak.d - 4.44 / std::sqrt(3.0)) < 1e-9) nuclear = peak.nuclear_barn.value();
  EXPECT_NEAR(nuclear, 8 * std::pow(4 * (-3.75 - 5.805), 2) / 100, 1e-3);
}

TEST(PolarisedTest, MeanIsUnpolarisedAndIronFlips) {
  // Iron, (1 1 0), moment 2.2 µB along z, Q in the plane across it: R = ((b + p)/(b − p))².
  const ComplexVector3 F = {0, 0, 2 * 2.2 * 0.6};
  const std::complex<double> nuclear = 2 * 9.45;
  const PolarisedIntensities result = polarised_intensities(nuclear, F, {0, 0, 3}, 1);
  const double p = 2.69542 * 2.2 * 0.6;
  EXPECT_NEAR(result.flipping_ratio(), std::pow((9.45 + p) / (9.45 - p), 2), 1e-5);
  EXPECT_NEAR(result.unpolarised(), 4 * (9.45 * 9.45 + p * p), 1e-3);
  const PolarisedIntensities half_polarised = polarised_intensities(nuclear, F, {0, 0, 1}, 0.5);
  EXPECT_NEAR(half_polarised.unpolarised(), result.unpolarised(), 1e-12);
  EXPECT_NEAR(half_polarised.along - half_polarised.against, 0.5 * (result.along - result.against),
              1e-12);
  const PolarisedIntensities across = polarised_intensities(nuclear, F, {1, 0, 0}, 1);
  EXPECT_NEAR(across.flipping_ratio(), 1, 1e-12);
}

TEST(ProfileTest, PseudoVoigtHasUnitAreaAndItsWidth) {
  for (const double eta : {0.0, 0.4, 1.0}) {
    double area = 0;
    for (int i = -200'000; i <= 200'000; ++i) area += pseudo_voigt(0.01 * i, 0, 0.5, eta) * 0.01;
    EXPECT_NEAR(area, 1, 2e-4) << eta;  // the Lorentzian tails reach beyond ±2000
    EXPECT_NEAR(pseudo_voigt(1.25, 1, 0.5, eta), pseudo_voigt(1, 1, 0.5, eta) / 2, 1e-12);
  }
}

TEST(ProfileTest, LinesKeepTheirAreaOnEveryAbscissa) {
  Measurement measurement;
  measurement.resolution = 0.01;
  const double q = 2.0;
  const std::vector<ProfileLine> lines = {{q, 7}};
  const struct {
    Geometry geometry;
    double centre, fwhm;
  } cases[] = {
      {Geometry{}, 2.0, 0.02},
      {ConstantWavelength{2}, 2 * std::asin(1 / std::numbers::pi) * 180 / std::numbers::pi,
       2 * std::tan(std::asin(1 / std::numbers::pi)) * 0.01 * 180 / std::numbers::pi},
      {Flight{145}, std::numbers::pi, 0.01 * std::numbers::pi},
  };
  for (const auto& [geometry, centre, fwhm] : cases) {
    measurement.geometry = geometry;
    std::vector<double> x;
    for (int i = -400; i <= 400; ++i) x.push_back(centre + 0.01 * i * fwhm);
    const std::vector<double> y = profile(measurement, lines, x, 0);
    double area = 0;
    for (const double value : y) area += value * 0.01 * fwhm;
    EXPECT_NEAR(area, 7, 1e-6);
    EXPECT_NEAR(y[450], y[400] / 2, 1e-9 * y[400]);  // half a width away
  }
}

}  // namespace
}  // namespace spinsieve
