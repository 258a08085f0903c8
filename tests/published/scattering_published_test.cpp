// Numbers of the open literature that constants, form factors and intensities must give.
#include <cmath>
#include <numbers>
#include <optional>
#include <set>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "scattering/constants.hpp"
#include "scattering/form_factor.hpp"
#include "scattering/geometry.hpp"
#include "scattering/intensity_form.hpp"
#include "scattering/structure_factor.hpp"

namespace spinsieve {
namespace {

using Complex = std::complex<double>;
const Fraction half(1, 2);

MagneticIon constant_form_factor() {
  MagneticIon ion;
  ion.ion = {"Mn", 2};
  ion.j0 = RadialCoefficients{0, 0, 0, 0, 0, 0, 1};
  return ion;
}

MagneticSite site(const FractionVector& position, const MagneticIon& ion) {
  MagneticSite result;
  result.site.label = "M";
  result.site.position = position;
  result.ion = ion;
  return result;
}

struct Atom {
  FractionVector position;
  FourierField::Component moment;  // along a, b, c, µB
};

/// One arrangement on one site, with its lines.
class Pattern {
 public:
  Pattern(const char* symbol, const Cell& cell, const MagneticIon& ion,
          const std::vector<Atom>& atoms, const FractionVector& k = {}, double q_max = 8)
      : cell_(cell),
        group_(parse_space_group(symbol)),
        scatterers_(cell_, group_, sites(atoms, ion)),
        k_(k) {
    const std::vector<Arm> arms = {{k, 0}};
    table_ = ReflectionTable(cell_, group_, arms, 0, q_max);
    field_.parameters = 1;
    FourierField& arm = field_.arms.emplace_back();
    arm.k = k;
    arm.self_conjugate = arm_kind(group_, k) != ArmKind::pair;
    for (const Atom& atom : atoms) {
      arm.atoms.push_back({0, atom.position});
      arm.components.push_back(atom.moment);
    }
    std::vector<std::size_t> all(table_.lines().size());
    for (std::size_t i = 0; i < all.size(); ++i) all[i] = i;
    forms_ = line_forms(scatterers_, field_, table_, all);
  }

  /// |F⊥|² in µB² of the whole line that holds hkl + k_sign k, 0 when there is none.
  double line(std::array<int, 3> hkl, int k_sign = 0) const {
    const std::optional<std::size_t> i = find(hkl, k_sign);
    return i ? forms_[*i].mu_b2()(0, 0) : 0;
  }
  /// The same per reflection of the line.
  double mean(std::array<int, 3> hkl, int k_sign = 0) const {
    const std::optional<std::size_t> i = find(hkl, k_sign);
    return i ? forms_[*i].mu_b2()(0, 0) / static_cast<double>(table_.lines()[*i].multiplicity) : 0;
  }
  ComplexVector3 amplitude(std::array<int, 3> hkl, int k_sign = 0) const {
    const double one = 1;
    return magnetic_structure_factor(scatterers_, field_.arms[0], std::span(&one, 1),
                                     reflection(hkl, k_sign));
  }
  double single(std::array<int, 3> hkl, int k_sign = 0) const {
    return squared_length(perpendicular(amplitude(hkl, k_sign), reflection(hkl, k_sign).q));
  }
  double q(std::array<int, 3> hkl, int k_sign = 0) const {
    return reflection(hkl, k_sign).q_length;
  }
  const ReflectionTable& table() const { return table_; }

 private:
  static std::vector<MagneticSite> sites(const std::vector<Atom>& atoms, const MagneticIon& ion) {
    return {site(atoms.front().position, ion)};
  }
  Reflection reflection(std::array<int, 3> hkl, int k_sign) const {
    Reflection result;
    result.hkl = hkl;
    result.k_sign = k_sign;
    const Vector3 components = reciprocal_components(result, k_);
    result.q = cell_.scattering_vector(components);
    result.q_length = cell_.q(components);
    return result;
  }
  std::optional<std::size_t> find(std::array<int, 3> hkl, int k_sign) const {
    const double wanted = q(hkl, k_sign);
    for (std::size_t i = 0; i < table_.lines().size(); ++i)
      if (std::abs(table_.lines()[i].q - wanted) < 1e-7) return i;
    return std::nullopt;
  }

  Cell cell_;
  SpaceGroup group_;
  MagneticScatterers scatterers_;
  FractionVector k_;
  ReflectionTable table_;
  MomentField field_;
  std::vector<IntensityForm> forms_;
};

MagneticIon ion(const char* text) {
  MagneticIon result;
  result.ion = parse_ion(text);
  return result;
}

TEST(PublishedConstants, MagneticScatteringLength) {
  // Shull & Smart (1949), Phys. Rev. 76, 1256; Halpern & Johnson (1939): 0.2695e-12 cm per µB.
  EXPECT_NEAR(magnetic_length_fm, 2.69542, 1e-4);
  EXPECT_NEAR(barn_per_mu_b2, 0.072653, 1e-6);
  EXPECT_NEAR(4 * std::numbers::pi * barn_per_mu_b2, 0.91298, 1e-4);
  EXPECT_NEAR(std::pow(neutron_gamma * electron_radius_fm, 2) / 100, 0.29061, 1e-4);
}

TEST(PublishedFormFactors, InternationalTablesC) {
  // Values of the tabulated fits, tables 4.4.5.2 and 4.4.5.3, s = sinθ/λ in Å⁻¹.
  const struct {
    const char* name;
    double s, f;
  } j0[] = {{"Mn2+", 0, 0.9992},     {"Mn2+", 0.05, 0.97209}, {"Mn2+", 0.10, 0.89616},
            {"Mn2+", 0.15, 0.78556}, {"Mn2+", 0.20, 0.65832}, {"Mn2+", 0.25, 0.53097},
            {"Mn2+", 0.30, 0.41503}, {"Mn2+", 0.40, 0.23532}, {"Mn2+", 0.50, 0.12073},
            {"Fe3+", 0, 0.9997},     {"Fe3+", 0.10, 0.92042}, {"Fe3+", 0.20, 0.72467},
            {"Fe3+", 0.30, 0.49946}, {"Fe3+", 0.40, 0.30969}, {"Fe3+", 0.50, 0.17488},
            {"Mn3+", 0.10, 0.91149}, {"Mn3+", 0.30, 0.46119}, {"Ni2+", 0.10, 0.92068},
            {"Ni2+", 0.30, 0.51602}, {"Cr3+", 0.10, 0.90112}, {"Cr3+", 0.30, 0.42102},
            {"Cu2+", 0.10, 0.92705}, {"Cu2+", 0.30, 0.54560}};
  for (const auto& [name, s, f] : j0) {
    SCOPED_TRACE(name);
    EXPECT_NEAR(FormFactor(ion(name))(s), f, 1e-5);
  }
  const struct {
    const char* name;
    double s, value;
  } j2[] = {{"Er3+", 0, 0},         {"Er3+", 0.1, 0.01980}, {"Er3+", 0.2, 0.06795},
            {"Er3+", 0.3, 0.12176}, {"Er3+", 0.5, 0.18825}, {"Nd3+", 0.1, 0.03030},
            {"Nd3+", 0.3, 0.15788}};
  for (const auto& [name, s, value] : j2) {
    SCOPED_TRACE(name);
    MagneticIon with = ion(name);
    with.c2 = 1;
    MagneticIon without = ion(name);
    without.c2 = 0;
    EXPECT_NEAR(FormFactor(with)(s) - FormFactor(without)(s), value, 1e-5);
  }
}

TEST(PublishedFormFactors, PrintedCoefficients) {
  // Re-typed from International Tables C, table 4.4.5.2.
  const struct {
    const char* name;
    RadialCoefficients j0;
  } rows[] = {
      {"Mn2+", {0.4220, 17.684, 0.5948, 6.005, 0.0043, -0.609, -0.0219}},
      {"Fe3+", {0.3972, 13.2442, 0.6295, 4.9034, -0.0314, 0.3496, 0.0044}},
  };
  for (const auto& [name, j0] : rows) {
    bool found = false;
    for (const TabulatedIntegrals& entry : tabulated_integrals()) {
      if (to_string(entry.ion) != name) continue;
      found = true;
      for (std::size_t i = 0; i < 7; ++i) EXPECT_NEAR((*entry.j0)[i], j0[i], 5e-5) << name;
    }
    EXPECT_TRUE(found) << name;
  }
}

TEST(PublishedPowderAverages, Shirane1959) {
  // Acta Cryst. 12, 282: mean of 1 − (e·m)² over the reflections of a line.
  const MagneticIon flat = constant_form_factor();
  const double c35 = std::cos(35 * std::numbers::pi / 180);
  const double s35 = std::sin(35 * std::numbers::pi / 180);
  const std::vector<FourierField::Component> directions = {
      {0, 0, 1}, {1, 0, 0}, {0.6, 0, 0.8}, {2 / 3.0, -1 / 3.0, 2 / 3.0}};
  for (const FourierField::Component& m : directions) {
    const Pattern cubic("P m -3 m", Cell(4, 4, 4, 90, 90, 90), flat, {{{}, m}});
    for (const std::array<int, 3> hkl : {std::array{1, 0, 0}, {1, 1, 0}, {2, 1, 1}, {3, 2, 1}})
      EXPECT_NEAR(cubic.mean(hkl), 2 / 3.0, 1e-10);
  }
  const struct {
    FourierField::Component m;
    double mean;
  } uniaxial[] = {{{0, 0, 1}, 0.464684},
                  {{s35, 0, c35}, 0.564359},
                  {{s35 * 0.6, s35 * 0.8, c35}, 0.564359},  // the azimuth does not matter
                  {{1, 0, 0}, 0.767658},
                  {{0.8, -0.6, 0}, 0.767658}};
  for (const auto& [m, mean] : uniaxial) {
    const Pattern tetragonal("P 4/m m m", Cell(4, 4, 5, 90, 90, 90), flat, {{{}, m}});
    EXPECT_NEAR(tetragonal.mean({2, 1, 3}), mean, 1e-6);
  }
}

class ManganeseOxide : public testing::Test {
 protected:
  /// Ratios to 111 (doubled cube) of integrated intensities at λ = 1.057 Å.
  static std::array<double, 4> intensities(const FourierField::Component& m) {
    const Pattern pattern("F m -3 m", Cell(4.4365, 4.4365, 4.4365, 90, 90, 90), ion("Mn2+"),
                          {{{}, m}}, {half, half, half});
    Measurement measurement;
    measurement.geometry = ConstantWavelength{1.057};
    measurement.intensity = IntensityKind::integrated;
    std::array<double, 4> result{};
    // 111, 311, 331, 333 + 511 of the doubled cube, found by |Q|.
    for (std::size_t i = 0; i < 4; ++i) {
      const double q =
          2 * std::numbers::pi / 8.873 * std::sqrt(std::array{3.0, 11.0, 19.0, 27.0}[i]);
      for (std::size_t l = 0; l < pattern.table().lines().size(); ++l) {
        if (std::abs(pattern.table().lines()[l].q - q) > 1e-6) continue;
        const Reflection r = pattern.table().reflections(pattern.table().lines()[l]).front();
        result[i] = pattern.line(r.hkl, 1) * lorentz_factor(measurement, q);
      }
    }
    return result;
  }
};

TEST_F(ManganeseOxide, MomentsInThePlane) {
  // Shull, Strauser & Wollan (1951), Phys. Rev. 83, 333; Roth (1958), Phys. Rev. 110, 1333.
  const double r6 = std::sqrt(6.0), r2 = std::sqrt(2.0);
  const auto a = intensities({1 / r6, 1 / r6, -2 / r6});
  const auto b = intensities({1 / r2, -1 / r2, 0});
  EXPECT_NEAR(a[1] / a[0], 0.2526, 1e-3);
  EXPECT_NEAR(a[2] / a[0], 0.1270, 1e-3);
  EXPECT_NEAR(a[3] / a[0], 0.0906, 1e-3);
  for (std::size_t i = 0; i < 4; ++i) EXPECT_NEAR(a[i], b[i], 1e-9 * a[0]);  // no direction fixed
}

TEST_F(ManganeseOxide, MomentsAlongCubeEdgeAndBodyDiagonal) {
  const auto edge = intensities({1, 0, 0});
  EXPECT_NEAR(edge[1] / edge[0], 0.4904, 1e-3);
  EXPECT_NEAR(edge[2] / edge[0], 0.1765, 1e-3);
  EXPECT_NEAR(edge[3] / edge[0], 0.1063, 1e-3);
  const double r3 = 1 / std::sqrt(3.0);
  const auto diagonal = intensities({r3, r3, r3});
  EXPECT_NEAR(diagonal[0], 0, 1e-12);
  EXPECT_GT(diagonal[1], 0.1);
}

TEST(PublishedRutile, Erickson1953) {
  // Phys. Rev. 90, 779: MnF2, a = 4.874, c = 3.310 Å.
  const Cell cell(4.874, 4.874, 3.310, 90, 90, 90);
  const std::vector<Atom> along_c = {{{}, {0, 0, 1}}, {{half, half, half}, {0, 0, -1}}};
  const Pattern flat("P 42/m n m", cell, constant_form_factor(), along_c);
  const double F2 = 4;  // of two unit moments in phase
  EXPECT_NEAR(flat.mean({0, 0, 1}), 0, 1e-12);
  EXPECT_NEAR(flat.mean({1, 0, 0}), F2, 1e-10);
  EXPECT_NEAR(flat.mean({1, 1, 1}) / F2, 0.4798, 1e-4);
  EXPECT_NEAR(flat.mean({2, 0, 1}) / F2, 0.6485, 1e-4);
  EXPECT_NEAR(flat.mean({1, 0, 2}) / F2, 0.1034, 1e-4);
  for (const std::array<int, 3> hkl : {std::array{1, 1, 0}, {1, 0, 1}, {2, 0, 0}, {2, 1, 1}})
    EXPECT_NEAR(flat.mean(hkl), 0, 1e-12);
  const Pattern real("P 42/m n m", cell, ion("Mn2+"),
                     {{{}, {0, 0, 5}}, {{half, half, half}, {0, 0, -5}}});
  EXPECT_NEAR(magnetic_length_fm * std::abs(real.amplitude({1, 0, 0})[2]), 24.020, 1e-2);
  EXPECT_NEAR(barn_per_mu_b2 * real.single({1, 0, 0}), 5.7696, 3e-3);
}

TEST(PublishedRutile, NickelFluorideMomentsInThePlane) {
  const Pattern along_a("P 42/m n m", Cell(4.65, 4.65, 3.08, 90, 90, 90), constant_form_factor(),
                        {{{}, {1, 0, 0}}, {{half, half, half}, {-1, 0, 0}}});
  EXPECT_NEAR(along_a.mean({0, 0, 1}), 4, 1e-10);
  EXPECT_NEAR(along_a.single({1, 0, 0}), 0, 1e-12);
  EXPECT_NEAR(along_a.single({0, 1, 0}), 4, 1e-10);
  EXPECT_NEAR(along_a.mean({1, 0, 0}), 2, 1e-10);  // the powder line keeps half
}

TEST(PublishedPerovskites, WollanAndKoehler1955) {
  // Phys. Rev. 100, 545: h² + k² + l² of the doubled cube by the number of odd indices.
  const struct {
    const char* type;
    FractionVector k;
    std::set<long> squares;  // up to 20
  } cases[] = {{"A", {0, 0, half}, {1, 5, 9, 13, 17}},
               {"B", {}, {4, 8, 12, 16, 20}},
               {"C", {half, half, 0}, {2, 6, 10, 14, 18}},
               {"G", {half, half, half}, {3, 11, 19}}};
  for (const auto& [type, k, squares] : cases) {
    SCOPED_TRACE(type);
    const double unit = 2 * std::numbers::pi / 8;
    const Pattern pattern("P m -3 m", Cell(4, 4, 4, 90, 90, 90), constant_form_factor(),
                          {{{}, {0.6, 0, 0.8}}}, k, unit * std::sqrt(20.5));
    std::set<long> found;
    for (const PowderLine& line : pattern.table().lines())
      found.insert(std::lround(std::pow(line.q / unit, 2)));
    EXPECT_EQ(found, squares);
  }
}

std::vector<Atom> corundum(const Fraction& z, const std::array<int, 4>& signs,
                           const FourierField::Component& direction) {
  const std::array<Fraction, 4> heights = {z, half - z, -z, half + z};
  std::vector<Atom> atoms;
  for (std::size_t i = 0; i < 4; ++i) {
    FourierField::Component m = direction;
    for (Complex& entry : m) entry *= signs[i];
    atoms.push_back({{0, 0, heights[i]}, m});
  }
  return atoms;
}

TEST(PublishedCorundum, HematiteShull1951) {
  // Phys. Rev. 83, 333; unit moments, hexagonal cell of 12 Fe, a = 5.035, c = 13.75 Å, z = 0.3553.
  const Cell cell(5.035, 5.035, 13.75, 90, 90, 120);
  const Fraction z(3553, 10000);
  const Pattern along_c("R -3 c", cell, constant_form_factor(),
                        corundum(z, {1, -1, 1, -1}, {0, 0, 1}));
  EXPECT_NEAR(along_c.mean({0, 0, 3}), 0, 1e-10);
  EXPECT_NEAR(along_c.mean({1, 0, 1}), 49.39, 0.01);
  EXPECT_NEAR(along_c.mean({1, 1, 3}), 92.72, 0.01);
  EXPECT_NEAR(along_c.mean({1, 0, 7}), 24.13, 0.01);
  const Pattern in_plane("R -3 c", cell, constant_form_factor(),
                         corundum(z, {1, -1, 1, -1}, {1, 0, 0}));
  EXPECT_NEAR(in_plane.mean({0, 0, 3}), 120.69, 0.01);
  for (const Pattern* pattern : {&along_c, &in_plane})
    for (const std::array<int, 3> hkl :
         {std::array{0, 1, 2}, {1, 0, 4}, {0, 0, 6}, {1, 1, 0}, {2, 0, 2}})
      EXPECT_NEAR(pattern->mean(hkl), 0, 1e-9);
}

TEST(PublishedCorundum, ChromiumOxideBrockhouse1953) {
  // J. Chem. Phys. 21, 961; Corliss et al. (1965): a = 4.96, c = 13.59 Å, z = 0.3475, 12 Cr.
  const Pattern pattern("R -3 c", Cell(4.96, 4.96, 13.59, 90, 90, 120), constant_form_factor(),
                        corundum(Fraction(3475, 10000), {1, -1, -1, 1}, {0, 0, 1}));
  EXPECT_NEAR(pattern.mean({0, 1, 2}), 91.08, 0.01);
  EXPECT_NEAR(pattern.mean({1, 0, 4}), 22.52, 0.01);
  EXPECT_NEAR(pattern.mean({2, 0, 2}), 115.90, 0.01);
  for (const std::array<int, 3> hkl : {std::array{0, 0, 3}, {1, 0, 1}, {1, 1, 3}})
    EXPECT_NEAR(pattern.mean(hkl), 0, 1e-9);
  EXPECT_GT(std::abs(pattern.amplitude({0, 0, 6})[2]), 1);  // F along Q: no intensity
  EXPECT_NEAR(pattern.mean({0, 0, 6}), 0, 1e-9);
}

/// The four one-dimensional arrangements of hexagonal RMnO3, moments in the plane.
std::vector<Atom> hexagonal_manganite(const Fraction& x, bool radial, int second_layer) {
  const double r3 = std::sqrt(3.0);
  const std::array<FourierField::Component, 3> along = {{{1, 0, 0}, {0, 1, 0}, {-1, -1, 0}}};
  const std::array<FourierField::Component, 3> across = {
      {{1 / r3, 2 / r3, 0}, {-2 / r3, -1 / r3, 0}, {1 / r3, -1 / r3, 0}}};
  const std::array<FractionVector, 6> positions = {
      {{x, 0, 0}, {0, x, 0}, {-x, -x, 0}, {-x, 0, half}, {0, -x, half}, {x, x, half}}};
  std::vector<Atom> atoms;
  for (std::size_t i = 0; i < 6; ++i) {
    FourierField::Component m = radial ? along[i % 3] : across[i % 3];
    if (i >= 3)
      for (Complex& entry : m) entry *= second_layer;
    atoms.push_back({positions[i], m});
  }
  return atoms;
}

TEST(PublishedHexagonalManganites, Munoz2000) {
  // Phys. Rev. B 62, 9498; Brown & Chatterji (2006); a = 6.14, c = 11.40 Å, unit moments.
  const Cell cell(6.14, 6.14, 11.40, 90, 90, 120);
  const auto pattern = [&cell](const Fraction& x, int number) {
    const bool radial = number == 2 || number == 3;
    const int second_layer = number == 1 || number == 2 ? -1 : 1;
    return Pattern("P 63 c m", cell, constant_form_factor(),
                   hexagonal_manganite(x, radial, second_layer), {}, 5);
  };
  const Fraction third(1, 3);
  const Pattern g1 = pattern(third, 1), g2 = pattern(third, 2), g3 = pattern(third, 3),
                g4 = pattern(third, 4);
  for (const Pattern* p : {&g1, &g3}) {
    EXPECT_NEAR(p->mean({1, 0, 0}), 9.00, 1e-3);
    EXPECT_NEAR(p->mean({1, 0, 1}), 1.608, 1e-3);
    EXPECT_NEAR(p->mean({1, 0, 2}), 9.00, 1e-3);
  }
  for (const Pattern* p : {&g2, &g4}) {
    EXPECT_NEAR(p->mean({1, 0, 0}), 0, 1e-10);
    EXPECT_NEAR(p->mean({1, 0, 1}), 9.00, 1e-3);
    EXPECT_NEAR(p->mean({1, 0, 2}), 4.188, 1e-3);
  }
  for (const PowderLine& line : g1.table().lines()) {  // identical patterns throughout
    const Reflection r = g1.table().reflections(line).front();
    EXPECT_NEAR(g1.line(r.hkl), g3.line(r.hkl), 1e-9);
    EXPECT_NEAR(g2.line(r.hkl), g4.line(r.hkl), 1e-9);
  }
  const Fraction x(34, 100);  // off 1/3 they differ
  EXPECT_NEAR(pattern(x, 1).mean({1, 0, 0}), 8.555, 2e-3);
  EXPECT_NEAR(pattern(x, 1).mean({1, 0, 1}), 1.686, 2e-3);
  EXPECT_NEAR(pattern(x, 1).mean({2, 0, 0}), 9.825, 2e-3);
  EXPECT_NEAR(pattern(x, 3).mean({1, 0, 0}), 9.435, 2e-3);
  EXPECT_NEAR(pattern(x, 3).mean({1, 0, 1}), 1.529, 2e-3);
  EXPECT_NEAR(pattern(x, 3).mean({2, 0, 0}), 8.131, 2e-3);
  EXPECT_NEAR(pattern(x, 2).mean({1, 0, 1}), 9.435, 2e-3);
  EXPECT_NEAR(pattern(x, 4).mean({1, 0, 1}), 8.555, 2e-3);
}

TEST(PublishedModulations, HelixSatellites) {
  // Koehler (1965), J. Appl. Phys. 36, 1078; Lovesey (1984): (M²/4)(1 + cos²α) each satellite.
  const double M = 3;
  const Complex i(0, 1);
  const FractionVector k = {0, 0, Fraction(2, 7)};
  const Cell cell(4, 4, 5, 90, 90, 90);
  const Pattern helix("P 4/m m m", cell, constant_form_factor(), {{{}, {M / 2, -i * M / 2., 0}}},
                      k);
  const Pattern other_hand("P 4/m m m", cell, constant_form_factor(),
                           {{{}, {M / 2, i * M / 2., 0}}}, k);
  const Pattern reversed("P 4/m m m", cell, constant_form_factor(), {{{}, {-M / 2, i * M / 2., 0}}},
                         k);
  for (const std::array<int, 3> hkl : {std::array{0, 0, 0}, {1, 0, 0}, {1, 1, 1}, {2, 0, 3}})
    for (const int sign : {-1, 1}) {
      const double cosine =
          std::abs(hkl[2] + sign * 2.0 / 7) / 5 * 2 * std::numbers::pi / helix.q(hkl, sign);
      EXPECT_NEAR(helix.single(hkl, sign), M * M / 4 * (1 + cosine * cosine), 1e-12);
      EXPECT_NEAR(other_hand.line(hkl, sign), helix.line(hkl, sign), 1e-11);
      EXPECT_NEAR(reversed.line(hkl, sign), helix.line(hkl, sign), 1e-11);
      const std::array<int, 3> opposite = {-hkl[0], -hkl[1], -hkl[2]};
      EXPECT_NEAR(helix.single(opposite, -sign), helix.single(hkl, sign), 1e-12);
    }
}

TEST(PublishedModulations, SinusoidAndAmplitudeNormalisation) {
  // A wave M cos(2π k·L) has S = M/2 on each of ±k: satellites of (M²/4) sin²(angle of Q and m);
  // where 2k is a lattice vector the amplitude is the moment itself.
  const double M = 2;
  const Cell cell(4, 4, 5, 90, 90, 90);
  const Pattern wave("P 4/m m m", cell, constant_form_factor(), {{{}, {0, 0, M / 2}}},
                     {0, 0, Fraction(1, 4)});
  for (const int sign : {-1, 1}) {
    EXPECT_NEAR(wave.single({0, 0, 1}, sign), 0, 1e-12);  // longitudinal, Q along m
    const double l = sign / 4.0 / 5;
    const double sine2 = 1 / 16.0 / (1 / 16.0 + l * l);
    EXPECT_NEAR(wave.single({1, 0, 0}, sign), M * M / 4 * sine2, 1e-12);
  }
  const Pattern doubled("P 4/m m m", cell, constant_form_factor(), {{{}, {M, 0, 0}}}, {0, 0, half});
  EXPECT_NEAR(doubled.single({0, 0, 0}, 1), M * M, 1e-12);
}

TEST(PublishedPyrochlore, AllInAllOutAndFerromagnet) {
  // 16d of Fd-3m, origin 2; unit moments, full cell of 16; absences as in Poole, Wills &
  // Lelièvre-Berna (2007), J. Phys.: Condens. Matter 19, 452201; values by independent sums.
  const Fraction quarter(1, 4);
  const double r3 = 1 / std::sqrt(3.0);
  const std::array<FractionVector, 4> positions = {{{half, half, half},
                                                    {half, quarter, quarter},
                                                    {quarter, half, quarter},
                                                    {quarter, quarter, half}}};
  const std::array<FourierField::Component, 4> inward = {
      {{r3, r3, r3}, {r3, -r3, -r3}, {-r3, r3, -r3}, {-r3, -r3, r3}}};
  std::vector<Atom> all_in;
  std::vector<Atom> ferromagnet;
  for (std::size_t i = 0; i < 4; ++i) {
    all_in.push_back({positions[i], inward[i]});
    ferromagnet.push_back({positions[i], {0, 0, 1}});
  }
  const Cell cell(10, 10, 10, 90, 90, 90);
  const Pattern in("F d -3 m", cell, constant_form_factor(), all_in, {}, 4.5);
  for (const std::array<int, 3> hkl :
       {std::array{1, 1, 1}, {2, 0, 0}, {2, 2, 2}, {4, 0, 0}, {4, 4, 0}})
    EXPECT_NEAR(in.mean(hkl), 0, 1e-10);
  EXPECT_NEAR(in.single({3, 3, 3}), 0, 1e-10);  // 511 shares its |Q|
  EXPECT_NEAR(in.mean({2, 2, 0}), 85.33, 0.01);
  EXPECT_NEAR(in.mean({3, 1, 1}), 62.06, 0.01);
  EXPECT_NEAR(in.mean({3, 3, 1}), 35.93, 0.01);
  EXPECT_NEAR(in.mean({4, 2, 0}), 68.27, 0.01);
  EXPECT_NEAR(in.mean({4, 2, 2}), 28.44, 0.01);
  EXPECT_NEAR(in.mean({5, 1, 1}) * 32 / 24, 25.28, 0.01);  // 24 of the 32 are {511}
  const Pattern ferro("F d -3 m", cell, constant_form_factor(), ferromagnet, {}, 4.5);
  EXPECT_NEAR(ferro.mean({1, 1, 1}), 42.67, 0.01);
  EXPECT_NEAR(ferro.mean({2, 0, 0}), 0, 1e-10);
  EXPECT_NEAR(ferro.mean({2, 2, 0}), 0, 1e-10);
  EXPECT_NEAR(ferro.mean({3, 1, 1}), 42.67, 0.01);
  EXPECT_NEAR(ferro.mean({2, 2, 2}), 170.67, 0.01);
  EXPECT_NEAR(ferro.mean({4, 0, 0}), 170.67, 0.01);
}

}  // namespace
}  // namespace spinsieve
