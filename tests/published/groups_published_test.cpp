#include <cmath>

#include <Eigen/Dense>
#include <gtest/gtest.h>

#include "arrangement/candidate.hpp"
#include "arrangement/phase_lattice.hpp"

namespace spinsieve {
namespace {

using Complex = std::complex<double>;
using Moment = std::array<Complex, 3>;
const Complex i{0, 1};

struct AtomOf {
  std::array<const char*, 3> position;
  Moment S;  ///< On a, b, c; the unit does not matter.
};

/// A published arrangement and the magnetic group it is known to have.
struct Published {
  const char* source;
  int hall_number;
  std::array<const char*, 3> k;
  std::vector<AtomOf> atoms;  ///< One site; the first atom is the listed one.
  const char* bns_number;
};

FractionVector vector_of(const std::array<const char*, 3>& v) {
  return {parse_fraction(v[0]), parse_fraction(v[1]), parse_fraction(v[2])};
}

Moment along(double x, double y, double z) { return {x, y, z}; }
Moment operator*(Complex factor, const Moment& m) {
  return {factor * m[0], factor * m[1], factor * m[2]};
}
Moment turn(double degrees, const Moment& m) { return std::polar(1.0, degrees * M_PI / 180) * m; }

const Moment a_axis = along(1, 0, 0);
const Moment b_axis = along(0, 1, 0);
const Moment c_axis = along(0, 0, 1);
/// Hexagonal: x̂ ± i ŷ with x along a and y at 90° to it.
const Moment circular = {Complex(1, 1 / std::sqrt(3.0)), Complex(0, 2 / std::sqrt(3.0)), 0};

std::vector<AtomOf> rutile(const Moment& first, const Moment& second) {
  return {{{"0", "0", "0"}, first}, {{"1/2", "1/2", "1/2"}, second}};
}

/// R-3c 12c in the order z, 1/2 − z, −z, 1/2 + z.
std::vector<AtomOf> corundum(std::array<double, 4> signs, const Moment& m) {
  return {{{"0", "0", "0.355"}, signs[0] * m},
          {{"0", "0", "0.145"}, signs[1] * m},
          {{"0", "0", "0.645"}, signs[2] * m},
          {{"0", "0", "0.855"}, signs[3] * m}};
}

/// Pnma 4b: (0,0,1/2), (1/2,0,0), (0,1/2,1/2), (1/2,1/2,0).
std::vector<AtomOf> pnma_4b(std::array<double, 4> signs, const Moment& m) {
  return {{{"0", "0", "1/2"}, signs[0] * m},
          {{"1/2", "0", "0"}, signs[1] * m},
          {{"0", "1/2", "1/2"}, signs[2] * m},
          {{"1/2", "1/2", "0"}, signs[3] * m}};
}

/// Pbnm 4b in Bertaut's order (1/2,0,0), (1/2,0,1/2), (0,1/2,1/2), (0,1/2,0).
std::vector<AtomOf> pbnm_4b(std::array<double, 4> signs, const Moment& m) {
  return {{{"1/2", "0", "0"}, signs[0] * m},
          {{"1/2", "0", "1/2"}, signs[1] * m},
          {{"0", "1/2", "1/2"}, signs[2] * m},
          {{"0", "1/2", "0"}, signs[3] * m}};
}

std::vector<AtomOf> single(const Moment& m) { return {{{"0", "0", "0"}, m}}; }

/// P6_3cm 6c (x,0,0), (0,x,0), (−x,−x,0) and the same half a cell up, negated.
std::vector<AtomOf> hexagonal_6c(const std::array<Moment, 6>& m) {
  return {{{"0.333", "0", "0"}, m[0]},       {{"0", "0.333", "0"}, m[1]},
          {{"-0.333", "-0.333", "0"}, m[2]}, {{"-0.333", "0", "1/2"}, m[3]},
          {{"0", "-0.333", "1/2"}, m[4]},    {{"0.333", "0.333", "1/2"}, m[5]}};
}

std::vector<AtomOf> chains(const Moment& S, double second) {
  return {{{"0", "0", "0"}, S}, {{"0", "0", "1/2"}, second * S}};
}

std::vector<AtomOf> pyrochlore(const std::array<Moment, 4>& m) {
  return {{{"1/2", "1/2", "1/2"}, m[0]},
          {{"1/2", "1/4", "1/4"}, m[1]},
          {{"1/4", "1/2", "1/4"}, m[2]},
          {{"1/4", "1/4", "1/2"}, m[3]}};
}

std::vector<AtomOf> triangle(const std::array<Moment, 3>& m) {
  return {{{"0", "1/2", "1/2"}, m[0]}, {{"1/2", "0", "1/2"}, m[1]}, {{"1/2", "1/2", "0"}, m[2]}};
}

/// P6_3/mmc 6h (x,2x,1/4) with x = 0.8388: inversion joins the layers with the same sign.
std::vector<AtomOf> kagome(const std::array<Moment, 3>& m) {
  return {{{"0.8388", "0.6776", "1/4"}, m[0]}, {{"0.3224", "0.1612", "1/4"}, m[1]},
          {{"0.8388", "0.1612", "1/4"}, m[2]}, {{"0.1612", "0.3224", "3/4"}, m[0]},
          {{"0.6776", "0.8388", "3/4"}, m[1]}, {{"0.1612", "0.8388", "3/4"}, m[2]}};
}

constexpr std::array<const char*, 3> zero{"0", "0", "0"};
constexpr std::array<const char*, 3> fcc_L{"1/2", "1/2", "1/2"};

const std::vector<Published>& published() {
  static const std::vector<Published> list{
      {"MnF2: Erickson 1953, Phys. Rev. 90, 779", 419, zero, rutile(c_axis, -1.0 * c_axis),
       "136.499"},
      {"rutile ferromagnet along c", 419, zero, rutile(c_axis, c_axis), "136.501"},
      {"NiF2: Moriya 1960, Phys. Rev. 117, 635", 419, zero, rutile(a_axis, -1.0 * a_axis),
       "58.398"},
      {"NiF2 with weak ferromagnetism along b: Moriya 1960", 419, zero,
       rutile(along(1, 0.1, 0), along(-1, 0.1, 0)), "58.398"},
      {"rutile, along [110]", 419, zero, rutile(along(1, 1, 0), along(-1, -1, 0)), "65.486"},
      {"rutile doubled along c", 419, {"0", "0", "1/2"}, rutile(c_axis, c_axis), "114.280"},
      {"Cr2O3: Brockhouse 1953, J. Chem. Phys. 21, 961", 460, zero,
       corundum({1, -1, -1, 1}, c_axis), "167.106"},
      {"Fe2O3 below the Morin point: Shull et al. 1951, Phys. Rev. 83, 333", 460, zero,
       corundum({1, -1, 1, -1}, c_axis), "167.103"},
      {"corundum ferromagnet: Dzyaloshinskii 1958, J. Phys. Chem. Solids 4, 241", 460, zero,
       corundum({1, 1, 1, 1}, c_axis), "167.107"},
      {"V2O3-like: Dzyaloshinskii 1958", 460, zero, corundum({1, 1, -1, -1}, c_axis), "167.105"},
      {"Fe2O3 above the Morin point, along the twofold axis: Dzyaloshinskii 1958", 460, zero,
       corundum({1, -1, 1, -1}, a_axis), "15.89"},
      {"the same in the glide plane", 460, zero, corundum({1, -1, 1, -1}, along(1, 2, 0)), "15.85"},
      {"MnO, NiO along [11-2]: Roth 1958, Phys. Rev. 110, 1333; Goodwin et al. 2006, PRL 96, "
       "047209",
       523, fcc_L, single(along(1, 1, -2)), "15.90"},
      {"MnO along [1-10]: Roth 1958", 523, fcc_L, single(along(1, -1, 0)), "12.63"},
      {"MnO, general in the (111) plane", 523, fcc_L, single(along(1, 0.3, -1.3)), "2.7"},
      {"FeO along [111]: Roth 1958", 523, fcc_L, single(along(1, 1, 1)), "167.108"},
      {"KNiF3 along [001]: Scatturin et al. 1961, Acta Cryst. 14, 19", 517, fcc_L, single(c_axis),
       "140.550"},
      {"KFeF3 along [111]: Scatturin et al. 1961", 517, fcc_L, single(along(1, 1, 1)), "167.108"},
      {"G type along [110]", 517, fcc_L, single(along(1, 1, 0)), "74.562"},
      {"A type, along k: Wollan & Koehler 1955, Phys. Rev. 100, 545",
       517,
       {"0", "0", "1/2"},
       single(c_axis),
       "124.360"},
      {"A type, across k", 517, {"0", "0", "1/2"}, single(a_axis), "51.298"},
      {"C type along c: Wollan & Koehler 1955",
       517,
       {"1/2", "1/2", "0"},
       single(c_axis),
       "127.397"},
      {"C type along a", 517, {"1/2", "1/2", "0"}, single(a_axis), "67.509"},
      {"fcc type I along k", 523, {"0", "0", "1"}, single(c_axis), "128.410"},
      {"fcc type I along [100]", 523, {"0", "0", "1"}, single(a_axis), "64.480"},
      {"fcc type I along [110]", 523, {"0", "0", "1"}, single(along(1, 1, 0)), "58.404"},
      {"commensurate Cr", 529, {"0", "0", "1"}, single(c_axis), "128.410"},
      {"bcc, k = (1/2,1/2,0), along c", 529, {"1/2", "1/2", "0"}, single(c_axis), "64.480"},
      {"Fe, bcc along [001]", 529, zero, single(c_axis), "139.537"},
      {"Ni, fcc along [111]", 523, zero, single(along(1, 1, 1)), "166.101"},
      {"Co, hcp along c",
       488,
       zero,
       {{{"1/3", "2/3", "1/4"}, c_axis}, {{"2/3", "1/3", "3/4"}, c_axis}},
       "194.270"},
      {"Pbnm G1: Bertaut 1968, Acta Cryst. A24, 217", 294, zero, pbnm_4b({1, -1, -1, 1}, a_axis),
       "62.441"},
      {"Pbnm G2, F along a: Bertaut 1968", 294, zero, pbnm_4b({1, 1, 1, 1}, a_axis), "62.446"},
      {"Pbnm G3, F along b: Bertaut 1968", 294, zero, pbnm_4b({1, 1, 1, 1}, b_axis), "62.447"},
      {"LaFeO3, G along a: Koehler, Wollan & Wilkinson 1960, Phys. Rev. 118, 58", 294, zero,
       pbnm_4b({1, -1, 1, -1}, a_axis), "62.448"},
      {"LaMnO3, A along b: Moussa et al. 1996, PRB 54, 15149", 294, zero,
       pbnm_4b({1, -1, -1, 1}, b_axis), "62.448"},
      {"HoMnO3, E type: Munoz et al. 2001, Inorg. Chem. 40, 1020",
       292,
       {"1/2", "0", "0"},
       pnma_4b({1, 1, -1, -1}, a_axis),
       "31.129"},
      {"the same, other domain", 292, {"1/2", "0", "0"}, pnma_4b({1, -1, -1, 1}, a_axis), "31.129"},
      {"E type, other stacking", 292, {"1/2", "0", "0"}, pnma_4b({1, 1, 1, 1}, a_axis), "33.149"},
      {"E type, half the sites empty",
       292,
       {"1/2", "0", "0"},
       pnma_4b({1, 0, -1, 0}, a_axis),
       "11.55"},
      {"YMnO3: Munoz et al. 2000, PRB 62, 9498", 479, zero,
       hexagonal_6c({along(1, 2, 0), along(-2, -1, 0), along(1, -1, 0), along(-1, -2, 0),
                     along(2, 1, 0), along(-1, 1, 0)}),
       "185.197"},
      {"ScMnO3: Munoz et al. 2000", 479, zero,
       hexagonal_6c({along(1, 0, 0), along(0, 1, 0), along(-1, -1, 0), along(-1, 0, 0),
                     along(0, -1, 0), along(1, 1, 0)}),
       "185.201"},
      {"hexagonal manganite, radial, same in both layers", 479, zero,
       hexagonal_6c({along(1, 0, 0), along(0, 1, 0), along(-1, -1, 0), along(1, 0, 0),
                     along(0, 1, 0), along(-1, -1, 0)}),
       "185.200"},
      {"hexagonal manganite, tangential, same in both layers", 479, zero,
       hexagonal_6c({along(1, 2, 0), along(-2, -1, 0), along(1, -1, 0), along(1, 2, 0),
                     along(-2, -1, 0), along(1, -1, 0)}),
       "185.199"},
      {"all-in-all-out: Wills et al. 2006, J. Phys. Condens. Matter 18, L37", 526, zero,
       pyrochlore({along(1, 1, 1), along(1, -1, -1), along(-1, 1, -1), along(-1, -1, 1)}),
       "227.131"},
      {"pyrochlore ferromagnet along [001]: Wills et al. 2006", 526, zero,
       pyrochlore({c_axis, c_axis, c_axis, c_axis}), "141.557"},
      {"ordered spin ice: Wills et al. 2006", 526, zero,
       pyrochlore({along(1, 1, 1), along(-1, 1, 1), along(1, -1, 1), along(-1, -1, 1)}), "141.557"},
      {"pyrochlore ferromagnet along [111]", 526, zero,
       pyrochlore({along(1, 1, 1), along(1, 1, 1), along(1, 1, 1), along(1, 1, 1)}), "166.101"},
      {"Mn3Ir, radial: Kren et al. 1968", 517, zero,
       triangle({along(-2, 1, 1), along(1, -2, 1), along(1, 1, -2)}), "166.101"},
      {"Mn3GaN, tangential: Fruchart & Bertaut 1978, J. Phys. Soc. Jpn 44, 781", 517, zero,
       triangle({along(0, 1, -1), along(-1, 0, 1), along(1, -1, 0)}), "166.97"},
      {"Mn3Sn, inverse triangle, Mn along [100]: Brown et al. 1990, J. Phys. Condens. Matter 2, "
       "9409",
       488, zero, kagome({along(1, 0, 0), along(-1, -1, 0), along(0, 1, 0)}), "63.463"},
      {"Mn3Sn, inverse triangle, Mn across [100]", 488, zero,
       kagome({along(1, 2, 0), along(1, -1, 0), along(-2, -1, 0)}), "63.464"},
      {"the same site, moments turning with the positions, radial", 488, zero,
       kagome({along(1, 2, 0), along(-2, -1, 0), along(1, -1, 0)}), "194.268"},
      {"the same site, moments turning with the positions, tangential", 488, zero,
       kagome({along(1, 0, 0), along(0, 1, 0), along(-1, -1, 0)}), "194.269"},
      {"CsCoCl3, phase 0: Mekata & Adachi 1978, J. Phys. Soc. Jpn 44, 806",
       488,
       {"1/3", "1/3", "1"},
       chains(c_axis, -1),
       "193.259"},
      {"CsCoCl3, partially disordered, phase 30",
       488,
       {"1/3", "1/3", "1"},
       chains(turn(30, c_axis), -1),
       "193.255"},
      {"CsCoCl3, partially disordered, phase 90",
       488,
       {"1/3", "1/3", "1"},
       chains(turn(90, c_axis), -1),
       "193.255"},
      {"CsCoCl3, general phase", 488, {"1/3", "1/3", "1"}, chains(turn(11, c_axis), -1), "188.218"},
      {"ferromagnetic chains, phase 0", 488, {"1/3", "1/3", "0"}, chains(c_axis, 1), "193.260"},
      {"ferromagnetic chains, phase 30",
       488,
       {"1/3", "1/3", "0"},
       chains(turn(30, c_axis), 1),
       "193.256"},
      {"ferromagnetic chains, general phase",
       488,
       {"1/3", "1/3", "0"},
       chains(turn(11, c_axis), 1),
       "188.219"},
      {"CsMnBr3, 120 degrees, moments along the axes",
       488,
       {"1/3", "1/3", "1"},
       chains(circular, -1),
       "189.221"},
      {"CsMnBr3, 120 degrees, turned by 30",
       488,
       {"1/3", "1/3", "1"},
       chains(turn(30, circular), -1),
       "189.225"},
      {"the same with ferromagnetic chains",
       488,
       {"1/3", "1/3", "0"},
       chains(circular, 1),
       "189.223"},
      {"the same turned by 30", 488, {"1/3", "1/3", "0"}, chains(turn(30, circular), 1), "189.224"},
  };
  return list;
}

/// All images of Fourier components under operations that keep ±k, with lattice translations.
std::vector<std::vector<Moment>> images(const WavevectorModes& modes,
                                        const std::vector<Moment>& S) {
  const LittleGroup& little_group = modes.little_group;
  const SpaceGroup& group = little_group.group();
  const Orbit& orbit = modes.sites[0].orbit();
  const FractionVector& k = little_group.k().constant;
  std::vector<std::pair<std::size_t, bool>> operations;
  for (const std::size_t g : little_group.operations()) operations.emplace_back(g, false);
  if (!little_group.self_conjugate())
    for (const std::size_t g : little_group.reversing()) operations.emplace_back(g, true);
  std::vector<std::vector<Moment>> result;
  const PhaseLattice phases(little_group.tables(), k);
  for (const auto& [g, reversing] : operations)
    for (const FractionVector& T : phases.classes()) {
      std::vector<Moment> image(S.size());
      const IntMatrix& R = group.operations()[g].rotation;
      for (std::size_t j = 0; j < S.size(); ++j) {
        const Orbit::Image to = orbit.image(group, g, j);
        const Complex factor = Phase(-dot(k, to.shift) - dot(k, T)).factor();
        for (std::size_t m = 0; m < 3; ++m)
          for (std::size_t n = 0; n < 3; ++n)
            image[to.atom][m] += factor * static_cast<double>(determinant(R) * R[m][n]) *
                                 (reversing ? std::conj(S[j][n]) : S[j][n]);
      }
      result.push_back(image);
    }
  return result;
}

/// Distance of S from what the candidate can reach, over real parameters.
double distance(const Candidate& candidate, const std::vector<Moment>& S) {
  const ExactArm& arm = candidate.field.arms[0];
  const auto n = static_cast<Eigen::Index>(candidate.field.parameters);
  const auto rows = static_cast<Eigen::Index>(6 * S.size());
  Eigen::MatrixXd A(rows, n);
  Eigen::VectorXd y(rows);
  for (std::size_t j = 0; j < S.size(); ++j)
    for (std::size_t m = 0; m < 3; ++m) {
      const auto row = static_cast<Eigen::Index>(6 * j + 2 * m);
      y[row] = S[j][m].real();
      y[row + 1] = arm.self_conjugate ? 0 : S[j][m].imag();
      for (Eigen::Index p = 0; p < n; ++p) {
        const Complex v = value(arm.components[static_cast<std::size_t>(p) * S.size() + j])[m];
        A(row, p) = v.real();
        A(row + 1, p) = arm.self_conjugate ? 0 : v.imag();
      }
    }
  const Eigen::VectorXd x = A.colPivHouseholderQr().solve(y);
  return (A * x - y).norm();
}

TEST(PublishedGroupTest, TheSmallestCandidateThatHoldsAnArrangementHasItsMagneticGroup) {
  for (const Published& row : published()) {
    SCOPED_TRACE(row.source);
    const Site site{"M", vector_of(row.atoms[0].position), {}};
    const std::vector<WavevectorModes> wavevectors{wavevector_modes(
        std::make_shared<SymmetryTables>(SpaceGroup::from_hall_number(row.hall_number)),
        Wavevector(vector_of(row.k)), std::span(&site, 1))};
    const Orbit& orbit = wavevectors[0].sites[0].orbit();
    ASSERT_EQ(orbit.atoms().size(), row.atoms.size());
    std::vector<Moment> S(row.atoms.size());
    std::size_t placed = 0;
    for (const AtomOf& atom : row.atoms)
      for (std::size_t j = 0; j < S.size(); ++j) {
        const FractionVector L = vector_of(atom.position) - orbit.atoms()[j].position;
        if (!wavevectors[0].little_group.group().in_lattice(L)) continue;
        S[j] = Phase(-dot(vector_of(row.k), L)).factor() * atom.S;
        ++placed;
      }
    ASSERT_EQ(placed, row.atoms.size());

    const std::vector<Candidate> candidates = enumerate_candidates(wavevectors, {});
    const std::vector<std::vector<Moment>> equivalents = images(wavevectors[0], S);
    const Candidate* smallest = nullptr;
    for (const Candidate& candidate : candidates) {
      const bool holds = std::ranges::any_of(equivalents, [&](const std::vector<Moment>& image) {
        return distance(candidate, image) < 1e-9;
      });
      if (holds && (!smallest || candidate.field.parameters < smallest->field.parameters))
        smallest = &candidate;
    }
    ASSERT_NE(smallest, nullptr);
    EXPECT_EQ(smallest->group->bns_number(), row.bns_number) << smallest->id;
  }
}

}  // namespace
}  // namespace spinsieve
