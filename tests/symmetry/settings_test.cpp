#include <algorithm>
#include <map>
#include <memory>
#include <tuple>

#include <gtest/gtest.h>

#include "crystal/fraction_matrix.hpp"
#include "exact/error.hpp"
#include "proof.hpp"
#include "symmetry/strata.hpp"

namespace spinsieve {
namespace {

/// What a stratum shows in any axes and origin: kind, arms, co-group, dimensions with realities.
using Signature =
    std::tuple<StratumKind, std::size_t, std::size_t, bool, std::vector<std::pair<int, Reality>>>;

std::vector<Signature> signatures(const SpaceGroup& group) {
  const auto tables = std::make_shared<const SymmetryTables>(group);
  std::vector<Signature> result;
  for (const Stratum& s : strata(*tables)) {
    std::vector<std::pair<int, Reality>> irreps;
    for (const SmallIrrep& irrep : small_irreps(LittleGroup(tables, s.k)))
      irreps.emplace_back(irrep.dimension, irrep.reality);
    std::ranges::sort(irreps);
    result.emplace_back(s.kind, s.arms, s.cogroup_order, s.isolated, irreps);
  }
  std::ranges::sort(result);
  return result;
}

TEST(SettingsSlowTest, AllSettingsShowTheStandardDimensionsAndRealities) {
  std::map<int, std::vector<Signature>> standard;
  for (int hall = 1; hall <= 530; ++hall) {
    const SpaceGroup group = SpaceGroup::from_hall_number(hall);
    SCOPED_TRACE("setting " + std::to_string(hall) + " " + group.hall_symbol());
    auto [entry, is_new] = standard.try_emplace(group.number());
    if (is_new) entry->second = signatures(SpaceGroup::from_number(group.number()));
    EXPECT_EQ(signatures(group), entry->second);
  }
  EXPECT_EQ(standard.size(), 230U);
}

TEST(SettingsSlowTest, IrrepsAreProvedInAllSettings) {
  for (int hall = 1; hall <= 530; ++hall) {
    const auto tables = std::make_shared<const SymmetryTables>(SpaceGroup::from_hall_number(hall));
    SCOPED_TRACE("setting " + std::to_string(hall));
    for (const Stratum& stratum : strata(*tables)) {
      const LittleGroup at(tables, generic_point(stratum.k));
      ASSERT_EQ(broken_law(at), "");
      ASSERT_EQ(broken_law(at, small_irreps(at)), "") << "k = " << to_string(at.k());
    }
  }
}

/// Under x' = x − s the operation {R|t} becomes {R|t + Rs − s}; D of each must not change. Sevenths
/// lie outside Q(e(1/24)), so they stay a separate phase.
void expect_same_after_shift(int number, const FractionVector& s) {
  SCOPED_TRACE("group " + std::to_string(number));
  const SpaceGroup group = SpaceGroup::from_number(number);
  const SpaceGroup shifted = with_origin(group, s);
  ASSERT_EQ(shifted.order(), group.order());
  const auto tables = std::make_shared<const SymmetryTables>(group);
  const auto shifted_tables = std::make_shared<const SymmetryTables>(shifted);
  for (const Stratum& stratum : strata(*tables)) {
    const Wavevector k = generic_point(stratum.k);
    SCOPED_TRACE("k = " + to_string(k));
    const LittleGroup before(tables, k);
    const LittleGroup after(shifted_tables, k);
    ASSERT_EQ(broken_law(after), "");
    const std::vector<SmallIrrep> irreps = small_irreps(before);
    const std::vector<SmallIrrep> moved = small_irreps(after);
    ASSERT_EQ(broken_law(after, moved), "");
    ASSERT_EQ(irreps.size(), moved.size());
    // Every irrep of one list is exactly one of the other, by characters of D.
    for (const SmallIrrep& irrep : irreps) {
      std::size_t matches = 0;
      for (const SmallIrrep& other : moved) {
        bool equal = other.reality == irrep.reality && other.dimension == irrep.dimension;
        for (std::size_t i = 0; i < before.order() && equal; ++i) {
          const Operation& g = group.operations()[before.operations()[i]];
          const auto index = shifted.find_rotation(g.rotation);
          ASSERT_TRUE(index.has_value());
          const std::size_t j = after.position(*index).value();
          const FractionVector T =
              g.translation + times(g.rotation, s) - s - shifted.operations()[*index].translation;
          ASSERT_TRUE(group.in_lattice(T));
          const Cyclotomic a = to_cyclotomic(irrep.characters[i]);
          const Cyclotomic b = to_cyclotomic(other.characters[j]);
          if (a.is_zero() || b.is_zero()) {
            equal = a == b;
            continue;
          }
          const Phase turn = after.phase(j) - Phase(dot(k.constant, T)) - before.phase(i);
          equal = Cyclotomic::holds(turn) && a == Cyclotomic::root(turn) * b;
        }
        if (equal) ++matches;
      }
      ASSERT_EQ(matches, 1U) << irrep.label;
    }
  }
}

TEST(SettingsTest, OddOriginsChangeNothingButPhases) {
  const FractionVector s{Fraction(1, 7), Fraction(2, 11), Fraction(3, 5)};
  for (const int number : {2, 14, 62, 92, 141, 167, 194, 198, 205, 220, 227, 228, 230})
    ASSERT_NO_FATAL_FAILURE(expect_same_after_shift(number, s));
}

TEST(SettingsSlowTest, OddOriginsChangeNothingButPhasesInAllGroups) {
  const FractionVector s{Fraction(3, 7), Fraction(-1, 35), Fraction(5, 48)};
  for (int number = 1; number <= 230; ++number)
    ASSERT_NO_FATAL_FAILURE(expect_same_after_shift(number, s));
}

/// x = P x' with P unimodular or the primitive basis.
SpaceGroup in_axes(const SpaceGroup& group, const FractionMatrix& P) {
  const FractionMatrix back = inverse(P);
  std::vector<Operation> operations;
  const auto include = [&](const Operation& g) {
    const auto R = to_integers(product(back, product(to_fractions(g.rotation), P)));
    if (R) operations.push_back({*R, times(back, g.translation)});
  };
  for (const FractionVector& c : group.centrings())
    for (Operation g : group.operations()) {
      g.translation = g.translation + c;
      include(g);
    }
  for (std::size_t i = 0; i < 3; ++i) {  // The old axes are lattice vectors of the new cell.
    Operation axis;
    axis.translation[i] = 1;
    include(axis);
  }
  return SpaceGroup::from_operations(operations);
}

TEST(SettingsTest, PrimitiveAxesOfCentredGroupsShowTheSameIrreps) {
  for (const int number :
       {5, 15, 43, 70, 88, 122, 141, 161, 167, 203, 206, 214, 219, 220, 228, 230}) {
    SCOPED_TRACE("group " + std::to_string(number));
    const SpaceGroup group = SpaceGroup::from_number(number);
    const auto basis = primitive_basis(group);
    const SpaceGroup primitive = in_axes(group, transpose(FractionMatrix(basis)));
    EXPECT_EQ(primitive.centrings().size(), 1U);
    EXPECT_EQ(primitive.order(), group.order());
    EXPECT_EQ(signatures(primitive), signatures(group));
  }
}

TEST(SettingsTest, ObliqueAxesShowTheSameIrreps) {
  const FractionMatrix P = to_fractions({{{1, 2, 0}, {0, 1, 0}, {-1, 1, 1}}});
  for (const int number : {14, 19, 43, 62, 92, 122, 161, 167, 185, 198, 205, 214, 220, 227, 230}) {
    SCOPED_TRACE("group " + std::to_string(number));
    const SpaceGroup group = SpaceGroup::from_number(number);
    const SpaceGroup oblique = in_axes(group, P);
    EXPECT_EQ(oblique.hall_number(), 0) << "no tabulated setting";
    EXPECT_EQ(signatures(oblique), signatures(group));
    const auto tables = std::make_shared<const SymmetryTables>(oblique);
    for (const Stratum& stratum : strata(*tables)) {
      const LittleGroup at(tables, generic_point(stratum.k));
      ASSERT_EQ(broken_law(at), "");
      ASSERT_EQ(broken_law(at, small_irreps(at)), "") << "k = " << to_string(at.k());
    }
  }
}

}  // namespace
}  // namespace spinsieve
