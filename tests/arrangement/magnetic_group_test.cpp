#include "arrangement/magnetic_group.hpp"

#include <algorithm>
#include <map>
#include <optional>
#include <random>
#include <set>
#include <string>
#include <string_view>
#include <vector>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "arrangement/magnetic_database.hpp"
#include "exact/error.hpp"

namespace spinsieve {
namespace {

using ::testing::HasSubstr;
using ::testing::ThrowsMessage;

FractionVector vector_of(int a, int b, int c, int denominator = 1) {
  return {Fraction(a, denominator), Fraction(b, denominator), Fraction(c, denominator)};
}

/// "-y,x,z+1/2" or, primed, "-y,x,z+1/2'".
PrimedOperation parsed(std::string_view text) {
  const bool primed = text.back() == '\'';
  if (primed) text.remove_suffix(1);
  return {parse_operation(text), primed};
}

/// All products of the generators, translations modulo the lattice.
std::vector<PrimedOperation> generated(const std::vector<std::string>& generators,
                                       const RationalLattice& lattice) {
  std::vector<PrimedOperation> result = {{Operation{}, false}};
  std::set<std::string> known = {to_string(result[0].operation)};
  for (std::size_t i = 0; i < result.size(); ++i) {
    for (const auto& text : generators) {
      const PrimedOperation g = parsed(text);
      PrimedOperation next{result[i].operation * g.operation, result[i].primed != g.primed};
      next.operation.translation = lattice.reduced(next.operation.translation);
      if (known.insert(to_string(next.operation) + (next.primed ? "'" : "")).second)
        result.push_back(next);
    }
  }
  return result;
}

RationalLattice lattice_of(const std::vector<FractionVector>& generators) {
  return RationalLattice(generators);
}

/// One published group: the generators were written down by hand from the arrangement.
struct PublishedGroup {
  const char* bns_number;
  const char* bns_symbol;
  std::vector<std::string> generators;
  std::vector<FractionVector> lattice;
  const char* source;
};

const std::vector<FractionVector> integers = {vector_of(1, 0, 0), vector_of(0, 1, 0),
                                              vector_of(0, 0, 1)};
const std::vector<FractionVector> rhombohedral = {vector_of(1, 0, 0), vector_of(0, 1, 0),
                                                  vector_of(2, 1, 1, 3)};
/// Translations of a face-centred lattice with an integer product with k = (1/2, 1/2, 1/2).
const std::vector<FractionVector> fcc_half = {vector_of(1, 1, 0), vector_of(1, -1, 0, 2),
                                              vector_of(0, 1, -1, 2)};

TEST(MagneticGroupTest, PublishedArrangementsHaveTheirPublishedGroups) {
  const PublishedGroup cases[] = {
      {"62.441",
       "Pnma",
       {"x+1/2,-y+1/2,-z", "-x+1/2,y+1/2,-z+1/2", "-x,-y,-z"},
       integers,
       "Bertaut 1968 (from memory): Pbnm 4b, Ax Gy Cz"},
      {"62.446",
       "Pn'm'a",
       {"x+1/2,-y+1/2,-z", "-x+1/2,y+1/2,-z+1/2'", "-x,-y,-z"},
       integers,
       "Bertaut 1968 (from memory): Pbnm 4b, Fx Cy Gz"},
      {"62.447",
       "Pnm'a'",
       {"x+1/2,-y+1/2,-z'", "-x+1/2,y+1/2,-z+1/2", "-x,-y,-z"},
       integers,
       "Bertaut 1968 (from memory): Pbnm 4b, Cx Fy Az"},
      {"62.448",
       "Pn'ma'",
       {"x+1/2,-y+1/2,-z'", "-x+1/2,y+1/2,-z+1/2'", "-x,-y,-z"},
       integers,
       "Koehler, Wollan & Wilkinson 1960 (from memory): LaFeO3, Gx Ay Fz"},
      {"62.449",
       "Pn'm'a'",
       {"x+1/2,-y+1/2,-z", "-x+1/2,y+1/2,-z+1/2", "-x,-y,-z'"},
       integers,
       "Bertaut 1968 (from memory): all mirrors primed"},
      {"136.499",
       "P4_2'/mnm'",
       {"-y+1/2,x+1/2,z+1/2'", "-x+1/2,y+1/2,-z+1/2", "-x,-y,-z"},
       integers,
       "Erickson 1953: MnF2, (+-) along c on 2a"},
      {"58.398",
       "Pnn'm'",
       {"x+1/2,-y+1/2,-z+1/2", "-x,-y,z'", "-x,-y,-z"},
       integers,
       "Erickson 1953; Moriya 1960: NiF2, (+-) along a on 2a"},
      {"167.106",
       "R-3'c'",
       {"-y,x-y,z", "y,x,-z+1/2", "-x,-y,-z'"},
       rhombohedral,
       "Brockhouse 1953: Cr2O3, (+--+) along c on 12c"},
      {"167.103",
       "R-3c",
       {"-y,x-y,z", "y,x,-z+1/2", "-x,-y,-z"},
       rhombohedral,
       "Shull, Strauser & Wollan 1951: hematite below the Morin point"},
      {"167.107",
       "R-3c'",
       {"-y,x-y,z", "y,x,-z+1/2'", "-x,-y,-z"},
       rhombohedral,
       "Dzyaloshinskii 1958 (from memory): (++++) along c on 12c"},
      {"15.89",
       "C2'/c'",
       {"x-y,-y,-z+1/2'", "-x,-y,-z"},
       rhombohedral,
       "Dzyaloshinskii 1958 (from memory): hematite, moments along the twofold axis"},
      {"15.85",
       "C2/c",
       {"x-y,-y,-z+1/2", "-x,-y,-z"},
       rhombohedral,
       "Dzyaloshinskii 1958 (from memory): hematite, moments in the glide plane"},
      {"15.90",
       "C_c2/c",
       {"-y,-x,-z'", "-x,-y,-z", "x+1/2,y+1/2,z'"},
       fcc_half,
       "Roth 1958; Goodwin et al. 2006: MnO, NiO, moments along [11-2]"},
      {"12.63",
       "C_c2/m",
       {"-y,-x,-z", "-x,-y,-z", "x+1/2,y+1/2,z'"},
       fcc_half,
       "Roth 1958: moments along [1-10]"},
      {"2.7",
       "P_S-1",
       {"-x,-y,-z", "x+1/2,y+1/2,z'"},
       fcc_half,
       "Roth 1958: moments in (111), general"},
      {"167.108",
       "R_I-3c",
       {"z,x,y", "-y,-x,-z'", "-x,-y,-z", "x+1/2,y+1/2,z'"},
       fcc_half,
       "Roth 1958: FeO, moments along [111]"},
      {"140.550",
       "I_c4/mcm",
       {"-y,x,z", "x,-y,-z'", "-x,-y,-z", "x+1,y,z'"},
       {vector_of(1, 1, 0), vector_of(1, -1, 0), vector_of(0, 1, 1)},
       "Scatturin et al. 1961: KMnF3, k = (1/2,1/2,1/2), moments along c"},
      {"128.410",
       "P_I4/mnc",
       {"-y,x,z", "x,-y,-z'", "-x,-y,-z", "x+1/2,y+1/2,z+1/2'"},
       integers,
       "commensurate Cr, k = (0,0,1), moments along c"},
      {"139.537",
       "I4/mm'm'",
       {"-y,x,z", "x,-y,-z'", "-x,-y,-z", "x+1/2,y+1/2,z+1/2"},
       integers,
       "Shull, Wollan & Koehler 1951: Fe, moments along c"},
  };
  for (const auto& [bns_number, bns_symbol, generators, lattice, source] : cases) {
    SCOPED_TRACE(source);
    const RationalLattice translations = lattice_of(lattice);
    const auto group = MagneticGroup::from_operations(generated(generators, translations), lattice);
    EXPECT_EQ(group.bns_number(), bns_number);
    EXPECT_EQ(group.bns_symbol(), bns_symbol);
  }
}

/// A setting of a group: x_setting = Q x_standard + q.
struct Setting {
  FractionMatrix Q;
  FractionVector q;

  FractionVector apply(const FractionVector& x) const { return times(Q, x) + q; }
};

std::optional<Operation> in_setting(const Operation& operation, const Setting& setting) {
  const FractionMatrix back = inverse(setting.Q);
  const std::optional<IntMatrix> R =
      to_integers(product(setting.Q, product(to_fractions(operation.rotation), back)));
  if (!R) return std::nullopt;
  Operation result{*R, {}};
  result.translation = setting.apply(operation.apply(times(back, vector_of(0, 0, 0) - setting.q)));
  return result;
}

class RandomSettings {
 public:
  explicit RandomSettings(unsigned seed) : random_(seed) {}

  int below(int n) { return static_cast<int>(random_() % static_cast<unsigned>(n)); }

  FractionMatrix unimodular() {
    FractionMatrix result = to_fractions(Operation{}.rotation);
    for (int step = 0; step < 5; ++step) {
      const auto i = static_cast<std::size_t>(below(3));
      const auto j = (i + 1 + static_cast<std::size_t>(below(2))) % 3;
      result[i] = result[i] + Fraction(below(5) - 2) * result[j];
    }
    return result;
  }

  FractionVector shift() {
    const int denominators[] = {1, 2, 3, 4, 5, 7, 8, 12, 24, 60};
    FractionVector result;
    for (auto& x : result) x = Fraction(below(60), denominators[below(10)]);
    return result;
  }

  /// Axes of the standard cell, of its primitive cell or of its face-centred subdivision, these
  /// divided or multiplied by a small number, mixed by a unimodular matrix.
  Setting setting(const RationalLattice& lattice) {
    const FractionMatrix faces = {vector_of(0, 1, 1, 2), vector_of(1, 0, 1, 2),
                                  vector_of(1, 1, 0, 2)};
    FractionMatrix basis = to_fractions(Operation{}.rotation);
    const int kind = below(3);
    if (kind == 1) basis = lattice.basis();
    if (kind == 2) basis = faces;
    const Fraction scales[] = {Fraction(1), Fraction(1, 2), Fraction(1, 3), Fraction(2)};
    const Fraction scale = scales[below(4)];
    for (auto& row : basis) row = scale * row;
    basis = product(unimodular(), basis);
    if (determinant(basis) < Fraction(0)) basis[0] = Fraction(-1) * basis[0];
    return {inverse(transpose(basis)), shift()};
  }

 private:
  std::mt19937 random_;
};

/// The group must be recognised from representatives given in any order in any setting, and the
/// transformation must turn each standard operation into one of those given, point by point.
void expect_recognised(int uni_number, const Setting& setting, RandomSettings& random) {
  const auto standard = standard_magnetic_operations(uni_number);
  std::vector<PrimedOperation> given;
  for (const auto& [operation, primed] : standard) {
    const auto there = in_setting(operation, setting);
    if (!there) return;  // this subdivision of the cell is not kept by the group
    given.push_back({*there, primed});
  }
  for (std::size_t i = given.size(); i > 1; --i)
    std::swap(given[i - 1], given[static_cast<std::size_t>(random.below(static_cast<int>(i)))]);
  const FractionMatrix translations = transpose(setting.Q);
  const auto group = MagneticGroup::from_operations(given, translations);
  ASSERT_EQ(group.uni_number(), uni_number);
  EXPECT_EQ(group.type(), magnetic_type(uni_number).type);

  const auto& [P, p] = group.transformation();
  EXPECT_GT(determinant(P), Fraction(0));
  EXPECT_EQ(determinant(P), determinant(setting.Q));
  std::vector<FractionVector> all = {translations[0], translations[1], translations[2]};
  for (const auto& [operation, primed] : given)
    if (!primed && operation.rotation == Operation{}.rotation) all.push_back(operation.translation);
  const RationalLattice lattice(all);
  const FractionVector points[] = {vector_of(0, 0, 0), vector_of(1, 0, 0), vector_of(0, 1, 0),
                                   vector_of(0, 0, 1)};
  for (const auto& [operation, primed] : standard) {
    const auto same = [&](const PrimedOperation& candidate) {
      if (candidate.primed != primed) return false;
      std::optional<FractionVector> shift;
      return std::ranges::all_of(points, [&](const FractionVector& x) {
        const FractionVector difference =
            candidate.operation.apply(times(P, x) + p) - (times(P, operation.apply(x)) + p);
        if (!shift) shift = difference;
        return lattice.contains(difference) && difference == *shift;
      });
    };
    EXPECT_TRUE(std::ranges::any_of(given, same)) << to_string(operation);
  }
}

TEST(MagneticGroupTest, All1651TypesAreRecognisedInRandomSettings) {
  RandomSettings random(1651);
  for (int uni_number = 1; uni_number <= 1651; ++uni_number) {
    SCOPED_TRACE(uni_number);
    const PrimitiveMagneticGroup group(standard_magnetic_operations(uni_number),
                                       RationalLattice().basis());
    for (int i = 0; i < 2; ++i)
      expect_recognised(uni_number, random.setting(group.lattice()), random);
  }
}

TEST(MagneticGroupSlowTest, All1651TypesAreRecognisedInManyRandomSettings) {
  RandomSettings random(2013);
  for (int uni_number = 1; uni_number <= 1651; ++uni_number) {
    SCOPED_TRACE(uni_number);
    const PrimitiveMagneticGroup group(standard_magnetic_operations(uni_number),
                                       RationalLattice().basis());
    for (int i = 0; i < 20; ++i)
      expect_recognised(uni_number, random.setting(group.lattice()), random);
  }
}

TEST(MagneticGroupTest, StandardSettingsTransformByTheIdentity) {
  for (int uni_number = 1; uni_number <= 1651; ++uni_number) {
    SCOPED_TRACE(uni_number);
    const auto group = MagneticGroup::from_operations(standard_magnetic_operations(uni_number),
                                                      RationalLattice().basis());
    EXPECT_EQ(to_string(group.transformation()), "a,b,c;0,0,0");
  }
}

TEST(MagneticGroupTest, TheOtherHandIsTheOtherEnantiomorph) {
  const struct {
    const char* bns_number;
    const char* mirrored;
  } cases[] = {{"76.7", "78.19"}, {"91.103", "95.135"}, {"144.4", "145.7"}, {"212.59", "213.63"}};
  for (const auto& [bns_number, mirrored] : cases) {
    SCOPED_TRACE(bns_number);
    for (int uni_number = 1; uni_number <= 1651; ++uni_number) {
      if (magnetic_symbols(uni_number).bns_number != bns_number) continue;
      auto operations = standard_magnetic_operations(uni_number);
      for (auto& [operation, primed] : operations)
        operation.translation = Fraction(-1) * operation.translation;
      EXPECT_EQ(MagneticGroup::from_operations(operations, RationalLattice().basis()).bns_number(),
                mirrored);
    }
  }
}

TEST(MagneticGroupTest, TransformationTextNamesAxesAndOrigin) {
  const auto group = MagneticGroup::from_operations(
      generated({"-x,-y,-z", "x,y,z+1'"},
                lattice_of({vector_of(1, 0, 0), vector_of(0, 1, 0), vector_of(0, 0, 2)})),
      std::vector{vector_of(1, 0, 0), vector_of(0, 1, 0), vector_of(0, 0, 2)});
  EXPECT_EQ(group.bns_symbol(), "P_S-1");
  EXPECT_EQ(to_string(group.transformation()), "a,b,2c;0,0,0");
  EXPECT_EQ(group.lattice().volume(), Fraction(2));
  EXPECT_EQ(group.operations().size(), 4U);

  BasisTransformation other;
  other.P = {vector_of(1, 1, 0, 2), vector_of(-1, 1, 0, 2), vector_of(0, 0, -1)};
  other.p = vector_of(0, 0, 1, 4);
  EXPECT_EQ(to_string(other), "1/2a-1/2b,1/2a+1/2b,-c;0,0,1/4");
}

TEST(MagneticGroupTest, RefusesWhatIsNoGroup) {
  const auto identify = [](const std::vector<std::string>& texts) {
    std::vector<PrimedOperation> operations;
    for (const auto& text : texts) operations.push_back(parsed(text));
    return MagneticGroup::from_operations(operations, RationalLattice().basis());
  };
  EXPECT_THAT(
      [&] {
        identify({"x,y,z", "-x,-y,z", "-x,-y,z+1/2"});
      },
      ThrowsMessage<Error>(HasSubstr("operation -x,-y,z+1/2 and another with the same")));
  EXPECT_THAT(
      [&] {
        identify({"x,y,z", "-x,-y,z", "x,-y,-z"});
      },
      ThrowsMessage<Error>(HasSubstr("not those of a magnetic space group")));
  EXPECT_THAT(
      [&] {
        MagneticGroup::from_operations(
            std::vector{parsed("y,x,-z")},
            std::vector{vector_of(2, 0, 0), vector_of(0, 1, 0), vector_of(0, 0, 1)});
      },
      ThrowsMessage<Error>(HasSubstr("the rotation of y,x,-z does not keep the lattice")));
  EXPECT_THAT(
      [&] {
        RationalLattice(std::vector{vector_of(1, 0, 0), vector_of(0, 1, 0)});
      },
      ThrowsMessage<Error>(HasSubstr("do not span a lattice of three dimensions")));
}

}  // namespace
}  // namespace spinsieve
