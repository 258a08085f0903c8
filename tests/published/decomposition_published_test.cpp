#include <algorithm>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "modes/wavevector_modes.hpp"

namespace spinsieve {
namespace {

FractionVector vector_of(const std::array<const char*, 3>& v) {
  return {parse_fraction(v[0]), parse_fraction(v[1]), parse_fraction(v[2])};
}

/// How one sub-orbit decomposes: [dimension, multiplicity] of all irreps, zeros included, sorted.
struct Part {
  std::size_t atoms;
  std::vector<std::pair<int, std::size_t>> multiplicities;
};

/// The physics source of a row is cited from memory; the numbers were recomputed by two independent
/// numeric programs.
struct Decomposition {
  const char* source;
  int hall_number;
  std::array<const char*, 3> k;
  std::array<const char*, 3> site;
  std::size_t arms;
  std::size_t little_cogroup_order;
  std::vector<Part> parts;
};

const std::vector<Decomposition> decompositions{
    {"P 2_1/b 2_1/n 2_1/m cab: Bertaut 1968, Acta Cryst. A24, 217; White 1969, J. Appl. Phys. 40, "
     "1061",
     294,
     {"0", "0", "0"},
     {"1/2", "0", "0"},
     1,
     8,
     {{4, {{1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 3}, {1, 3}, {1, 3}, {1, 3}}}}},
    {"P 2_1/n 2_1/m 2_1/a: as C1, Pnma",
     292,
     {"0", "0", "0"},
     {"0", "0", "1/2"},
     1,
     8,
     {{4, {{1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 3}, {1, 3}, {1, 3}, {1, 3}}}}},
    {"P 2_1/b 2_1/n 2_1/m cab: Bertaut 1968; White 1969",
     294,
     {"0", "0", "0"},
     {"1/50", "1/20", "1/4"},
     1,
     8,
     {{4, {{1, 1}, {1, 1}, {1, 1}, {1, 1}, {1, 2}, {1, 2}, {1, 2}, {1, 2}}}}},
    {"P 2_1/n 2_1/m 2_1/a: as C2, Pnma",
     292,
     {"0", "0", "0"},
     {"1/20", "1/4", "1/50"},
     1,
     8,
     {{4, {{1, 1}, {1, 1}, {1, 1}, {1, 1}, {1, 2}, {1, 2}, {1, 2}, {1, 2}}}}},
    {"R -3 2/c H: Dzyaloshinskii 1958, J. Phys. Chem. Solids 4, 241",
     460,
     {"0", "0", "0"},
     {"0", "0", "71/200"},
     1,
     12,
     {{4, {{1, 1}, {1, 1}, {1, 1}, {1, 1}, {2, 2}, {2, 2}}}}},
    {"R -3 2/c H: FeF3 and carbonates",
     460,
     {"0", "0", "0"},
     {"0", "0", "0"},
     1,
     12,
     {{2, {{1, 0}, {1, 0}, {1, 1}, {1, 1}, {2, 0}, {2, 2}}}}},
    {"R -3 2/c H: recomputed independently",
     460,
     {"0", "0", "0"},
     {"3/10", "0", "1/4"},
     1,
     12,
     {{6, {{1, 1}, {1, 1}, {1, 2}, {1, 2}, {2, 3}, {2, 3}}}}},
    {"P 4_2/m 2_1/n 2/m: Dimmock & Wheeler 1962, Phys. Rev. 127, 391",
     419,
     {"0", "0", "0"},
     {"0", "0", "0"},
     1,
     16,
     {{2, {{1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 1}, {1, 1}, {2, 0}, {2, 2}}}}},
    {"F 4_1/d -3 2/m 2: Wills et al. 2006, J. Phys. Condens. Matter 18, L37",
     526,
     {"0", "0", "0"},
     {"1/2", "1/2", "1/2"},
     1,
     48,
     {{4, {{1, 0}, {1, 0}, {1, 0}, {1, 1}, {2, 0}, {2, 1}, {3, 0}, {3, 0}, {3, 1}, {3, 2}}}}},
    {"F 4_1/d -3 2/m 2: Roth 1964, J. Phys. Chem. Solids 25, 1",
     526,
     {"0", "0", "0"},
     {"1/8", "1/8", "1/8"},
     1,
     48,
     {{2, {{1, 0}, {1, 0}, {1, 0}, {1, 0}, {2, 0}, {2, 0}, {3, 0}, {3, 0}, {3, 1}, {3, 1}}}}},
    {"F 4_1/d -3 2/m 2: recomputed independently",
     526,
     {"0", "0", "1"},
     {"1/2", "1/2", "1/2"},
     3,
     16,
     {{4, {{2, 1}, {2, 1}, {2, 2}, {2, 2}}}}},
    {"F 4_1/d -3 2/m 2: recomputed independently",
     526,
     {"0", "0", "1"},
     {"1/8", "1/8", "1/8"},
     3,
     16,
     {{2, {{2, 0}, {2, 1}, {2, 1}, {2, 1}}}}},
    {"P 6_3 c m: Munoz et al. 2000, PRB 62, 9498",
     479,
     {"0", "0", "0"},
     {"333/1000", "0", "0"},
     1,
     12,
     {{6, {{1, 1}, {1, 1}, {1, 2}, {1, 2}, {2, 3}, {2, 3}}}}},
    {"P 6_3 c m: same family as YMnO3",
     479,
     {"0", "0", "0"},
     {"0", "0", "27/100"},
     1,
     12,
     {{2, {{1, 0}, {1, 0}, {1, 1}, {1, 1}, {2, 1}, {2, 1}}}}},
    {"P 6_3 c m: same family as YMnO3",
     479,
     {"0", "0", "0"},
     {"1/3", "2/3", "23/100"},
     1,
     12,
     {{4, {{1, 1}, {1, 1}, {1, 1}, {1, 1}, {2, 2}, {2, 2}}}}},
    {"P 2_1/b 2_1/n 2_1/m cab: Kenzelmann et al. 2005, PRL 95, 087206",
     294,
     {"0", "7/25", "0"},
     {"1/2", "0", "0"},
     2,
     4,
     {{4, {{1, 3}, {1, 3}, {1, 3}, {1, 3}}}}},
    {"P 2_1/b 2_1/n 2_1/m cab: Brinks et al. 2001, PRB 63, 094411",
     294,
     {"0", "7/25", "0"},
     {"1/50", "2/25", "1/4"},
     2,
     4,
     {{2, {{1, 1}, {1, 1}, {1, 2}, {1, 2}}}, {2, {{1, 1}, {1, 1}, {1, 2}, {1, 2}}}}},
    {"F 4/m -3 2/m: Roth 1958, Phys. Rev. 110, 1333",
     523,
     {"1/2", "1/2", "1/2"},
     {"0", "0", "0"},
     4,
     12,
     {{1, {{1, 0}, {1, 0}, {1, 0}, {1, 1}, {2, 0}, {2, 1}}}}},
    {"F 4/m -3 2/m: fcc type I",
     523,
     {"0", "0", "1"},
     {"0", "0", "0"},
     3,
     16,
     {{1, {{1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 1}, {2, 0}, {2, 1}}}}},
    {"F 4/m -3 2/m: fcc type III",
     523,
     {"1/2", "0", "1"},
     {"0", "0", "0"},
     6,
     8,
     {{1, {{1, 0}, {1, 0}, {1, 0}, {1, 1}, {2, 1}}}}},
    {"I 4/m -3 2/m: bcc",
     529,
     {"0", "0", "1"},
     {"0", "0", "0"},
     1,
     48,
     {{1, {{1, 0}, {1, 0}, {1, 0}, {1, 0}, {2, 0}, {2, 0}, {3, 0}, {3, 0}, {3, 0}, {3, 1}}}}},
    {"I 4/m -3 2/m: bcc",
     529,
     {"1/2", "1/2", "0"},
     {"0", "0", "0"},
     6,
     8,
     {{1, {{1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 1}, {1, 1}, {1, 1}}}}},
    {"I 4/m -3 2/m: bcc",
     529,
     {"1/2", "1/2", "1/2"},
     {"0", "0", "0"},
     2,
     24,
     {{1, {{1, 0}, {1, 0}, {2, 0}, {3, 0}, {3, 1}}}}},
    {"P 4/m -3 2/m: Wollan & Koehler 1955, Phys. Rev. 100, 545",
     517,
     {"1/2", "1/2", "1/2"},
     {"0", "0", "0"},
     1,
     48,
     {{1, {{1, 0}, {1, 0}, {1, 0}, {1, 0}, {2, 0}, {2, 0}, {3, 0}, {3, 0}, {3, 0}, {3, 1}}}}},
    {"P 4/m -3 2/m: Wollan & Koehler 1955",
     517,
     {"0", "0", "1/2"},
     {"0", "0", "0"},
     3,
     16,
     {{1, {{1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 1}, {2, 0}, {2, 1}}}}},
    {"P 4/m -3 2/m: Wollan & Koehler 1955",
     517,
     {"1/2", "1/2", "0"},
     {"0", "0", "0"},
     3,
     16,
     {{1, {{1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 0}, {1, 1}, {2, 0}, {2, 1}}}}},
    {"P 4/m -3 2/m: Kren et al. 1968; Fruchart & Bertaut 1978, J. Phys. Soc. Jpn 44, 781",
     517,
     {"0", "0", "0"},
     {"0", "1/2", "1/2"},
     1,
     48,
     {{3, {{1, 0}, {1, 0}, {1, 0}, {1, 0}, {2, 0}, {2, 0}, {3, 0}, {3, 0}, {3, 1}, {3, 2}}}}},
    {"P 6_3/m 2/m 2/c: Brown et al. 1990, J. Phys. Condens. Matter 2, 9409",
     488,
     {"0", "0", "0"},
     {"2097/2500", "847/1250", "1/4"},
     1,
     24,
     {{6,
       {{1, 0},
        {1, 0},
        {1, 1},
        {1, 1},
        {1, 1},
        {1, 1},
        {1, 1},
        {1, 1},
        {2, 1},
        {2, 1},
        {2, 2},
        {2, 2}}}}},
    {"P 6_3/m 2/m 2/c: Mekata & Adachi 1978, J. Phys. Soc. Jpn 44, 806",
     488,
     {"1/3", "1/3", "0"},
     {"0", "0", "0"},
     2,
     12,
     {{2, {{1, 0}, {1, 0}, {1, 1}, {1, 1}, {2, 1}, {2, 1}}}}},
    {"P 6_3/m 2/m 2/c: Mekata & Adachi 1978",
     488,
     {"1/3", "1/3", "1"},
     {"0", "0", "0"},
     2,
     12,
     {{2, {{1, 0}, {1, 0}, {1, 1}, {1, 1}, {2, 1}, {2, 1}}}}},
    {"P 6_3/m 2/m 2/c: recomputed independently",
     488,
     {"1/3", "1/3", "1/2"},
     {"0", "0", "0"},
     2,
     12,
     {{2, {{2, 1}, {2, 1}, {2, 1}}}}},
    {"P 2_1/n 2_1/m 2_1/a: Munoz et al. 2001, Inorg. Chem. 40, 1020",
     292,
     {"1/2", "0", "0"},
     {"0", "0", "1/2"},
     1,
     8,
     {{4, {{2, 3}, {2, 3}}}}},
    {"P 4_2/m 2_1/n 2/m: Yoshimori 1959, J. Phys. Soc. Jpn 14, 807",
     419,
     {"0", "0", "2/7"},
     {"0", "0", "0"},
     2,
     8,
     {{2, {{1, 0}, {1, 0}, {1, 1}, {1, 1}, {2, 2}}}}},
    {"P 6_3/m 2/m 2/c: Koehler 1965, J. Appl. Phys. 36, 1078",
     488,
     {"0", "0", "27/100"},
     {"1/3", "2/3", "1/4"},
     2,
     12,
     {{2, {{1, 0}, {1, 0}, {1, 1}, {1, 1}, {2, 1}, {2, 1}}}}},
    {"I 4/m 2/m 2/m: Herpin & Meriel 1961, J. Phys. Radium 22, 337",
     424,
     {"0", "0", "7/25"},
     {"0", "0", "0"},
     2,
     8,
     {{1, {{1, 0}, {1, 0}, {1, 0}, {1, 1}, {2, 1}}}}},
    {"P 6_3/m 2/m 2/c: NiAs type",
     488,
     {"0", "0", "0"},
     {"0", "0", "0"},
     1,
     24,
     {{2,
       {{1, 0},
        {1, 0},
        {1, 0},
        {1, 0},
        {1, 0},
        {1, 0},
        {1, 1},
        {1, 1},
        {2, 0},
        {2, 0},
        {2, 1},
        {2, 1}}}}},
};

TEST(PublishedDecompositionTest, MagneticRepresentationsDecomposeAsPublished) {
  for (const Decomposition& row : decompositions) {
    SCOPED_TRACE(row.source);
    const Site site{"M", vector_of(row.site), {}};
    const WavevectorModes modes = wavevector_modes(
        std::make_shared<SymmetryTables>(SpaceGroup::from_hall_number(row.hall_number)),
        Wavevector(vector_of(row.k)), std::span(&site, 1));
    EXPECT_EQ(modes.little_group.star().size(), row.arms);
    EXPECT_EQ(modes.little_group.order(), row.little_cogroup_order);
    const MagneticRepresentation& representation = modes.sites[0];
    ASSERT_EQ(representation.suborbits().size(), row.parts.size());
    for (std::size_t s = 0; s < row.parts.size(); ++s) {
      EXPECT_EQ(representation.suborbits()[s].atoms.size(), row.parts[s].atoms);
      std::vector<std::pair<int, std::size_t>> found;
      for (std::size_t n = 0; n < modes.irreps.size(); ++n)
        found.emplace_back(modes.irreps[n].dimension, representation.multiplicity(n, s));
      std::ranges::sort(found);
      EXPECT_EQ(found, row.parts[s].multiplicities);
    }
  }
}

/// Signs of one component over the four atoms of a published basis vector; 0 where it is absent.
struct ModeLetters {
  const char* source;
  std::array<int, 3> characters;  ///< Under 2x, 2y and the inversion.
  std::array<std::array<int, 4>, 3> signs;
};

// Bertaut 1968, Acta Cryst. A24, 217, table for the 4b site of Pbnm (from memory), atoms (1/2,0,0),
// (1/2,0,1/2), (0,1/2,1/2), (0,1/2,0): F ++++, G +-+-, C ++--, A +--+.
TEST(PublishedDecompositionTest, OrthoferriteModesCarryBertautsLetters) {
  constexpr std::array<int, 4> F{1, 1, 1, 1};
  constexpr std::array<int, 4> G{1, -1, 1, -1};
  constexpr std::array<int, 4> C{1, 1, -1, -1};
  constexpr std::array<int, 4> A{1, -1, -1, 1};
  const std::vector<ModeLetters> letters{
      {"G1: Ax Gy Cz", {1, 1, 1}, {A, G, C}},
      {"G2: Fx Cy Gz", {1, -1, 1}, {F, C, G}},
      {"G3: Cx Fy Az", {-1, 1, 1}, {C, F, A}},
      {"G4: Gx Ay Fz", {-1, -1, 1}, {G, A, F}},
  };
  const std::vector<std::array<const char*, 3>> order{
      {"1/2", "0", "0"}, {"1/2", "0", "1/2"}, {"0", "1/2", "1/2"}, {"0", "1/2", "0"}};
  const std::vector<IntMatrix> generators{{{{1, 0, 0}, {0, -1, 0}, {0, 0, -1}}},
                                          {{{-1, 0, 0}, {0, 1, 0}, {0, 0, -1}}},
                                          {{{-1, 0, 0}, {0, -1, 0}, {0, 0, -1}}}};
  const Site site{"Fe", vector_of(order[0]), {}};
  const WavevectorModes modes =
      wavevector_modes(std::make_shared<SymmetryTables>(SpaceGroup::from_hall_number(294)),
                       Wavevector(FractionVector{}), std::span(&site, 1));
  const MagneticRepresentation& representation = modes.sites[0];
  for (const ModeLetters& row : letters) {
    SCOPED_TRACE(row.source);
    std::size_t irrep = modes.irreps.size();
    for (std::size_t n = 0; n < modes.irreps.size(); ++n) {
      bool matches = true;
      for (std::size_t g = 0; g < 3; ++g) {
        const auto operation = modes.little_group.group().find_rotation(generators[g]);
        ASSERT_TRUE(operation.has_value());
        const auto position = modes.little_group.position(*operation);
        matches = matches && to_cyclotomic(modes.irreps[n].characters[*position]) ==
                                 Cyclotomic(row.characters[g]);
      }
      if (matches) irrep = n;
    }
    ASSERT_LT(irrep, modes.irreps.size());
    ASSERT_EQ(representation.multiplicity(irrep), 3U);
    std::size_t axis = 0;
    for (const ModeCopy& copy : representation.copies()) {
      if (copy.irrep != irrep) continue;
      const SubOrbit& part = representation.suborbits()[copy.suborbit];
      for (std::size_t a = 0; a < copy.atoms; ++a) {
        const FractionVector& at = representation.orbit().atoms()[part.atoms[a]].position;
        for (std::size_t j = 0; j < 4; ++j)
          if (modulo_one(at) == modulo_one(vector_of(order[j]))) {
            EXPECT_EQ(copy.component(0, a)[axis], Cyclotomic(row.signs[axis][j]));
          }
      }
      ++axis;
    }
    EXPECT_EQ(axis, 3U);
  }
}

// The axial factor det(R): without it the identity irrep at k = 0 would appear otherwise.
TEST(PublishedDecompositionTest, TheIdentityIrrepCountsAxialAndPolarVectorsApart) {
  struct Count {
    const char* what;
    int hall_number;
    std::array<const char*, 3> site;
    std::size_t axial;
    std::size_t polar;
  };
  const std::vector<Count> counts{{"Pnma 4c", 292, {"1/20", "1/4", "1/50"}, 1, 2},
                                  {"Pbnm 4c", 294, {"1/50", "1/20", "1/4"}, 1, 2},
                                  {"P6_3cm 6c", 479, {"333/1000", "0", "0"}, 1, 2},
                                  {"Pnma 4b", 292, {"0", "0", "1/2"}, 3, 0}};
  for (const Count& row : counts) {
    SCOPED_TRACE(row.what);
    const LittleGroup little_group(
        std::make_shared<SymmetryTables>(SpaceGroup::from_hall_number(row.hall_number)),
        Wavevector(FractionVector{}));
    const std::vector<SmallIrrep> irreps = small_irreps(little_group);
    const Orbit orbit(little_group.group(), vector_of(row.site));
    EXPECT_EQ(multiplicities(little_group, irreps, orbit, AtomQuantity::axial)[0], row.axial);
    EXPECT_EQ(multiplicities(little_group, irreps, orbit, AtomQuantity::polar)[0], row.polar);
  }
}

}  // namespace
}  // namespace spinsieve
