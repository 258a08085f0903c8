#include "ranking/ties.hpp"

#include <cmath>

#include <gtest/gtest.h>

#include "cases.hpp"

namespace spinsieve {
namespace {

using cases::data_of;
using cases::model_of;
using cases::random_forms;

FitData any_data(std::size_t points, std::vector<ScaleGroup> scales = {ScaleGroup{}}) {
  return data_of(std::vector<double>(points, 1.0), std::vector<double>(points, 0.1),
                 std::move(scales));
}

Eigen::MatrixXd random_matrix(RandomDraws& random, Eigen::Index rows, Eigen::Index columns) {
  Eigen::MatrixXd result(rows, columns);
  for (double& entry : result.reshaped()) entry = random.normal();
  return result;
}

std::vector<Eigen::MatrixXd> carried(const std::vector<Eigen::MatrixXd>& forms,
                                     const Eigen::MatrixXd& L) {
  std::vector<Eigen::MatrixXd> result;
  for (const Eigen::MatrixXd& M : forms) result.emplace_back(L.transpose() * M * L);
  return result;
}

TEST(TiesTest, AnyChangeOfParametersIsFound) {
  RandomDraws random(51);
  for (std::uint64_t trial = 0; trial < 60; ++trial) {
    const Eigen::Index n = 1 + static_cast<Eigen::Index>(trial % 6);
    const std::size_t points = 1 + trial % 15;
    const auto forms = random_forms(random, n, points);
    const Eigen::MatrixXd L = random_matrix(random, n, n);
    const FitData data = any_data(points);
    const Tie found = tie(data, model_of(forms), model_of(carried(forms, L)));
    EXPECT_EQ(found.relation, TieRelation::equal) << trial;
    ASSERT_EQ(found.proof, TieProof::proved) << trial;
    // The map itself, on the definition: equal intensities for random parameters.
    const Eigen::VectorXd c = random.normal_vector(n);
    const Eigen::VectorXd other = found.map * c;
    for (const Eigen::MatrixXd& M : forms) {
      const Eigen::MatrixXd M_other = L.transpose() * M * L;
      EXPECT_NEAR(c.dot(M * c), other.dot(M_other * other), 1e-7 * M.norm() * c.squaredNorm());
    }
  }
}

TEST(TiesTest, FreeDirectionInThePlaneIsNoObstacle) {
  // Both see a² + b² and d²; in the second the plane is turned, stretched and has one parameter
  // more that no line sees. Every form commutes with turns of the plane.
  const double forms[3][2] = {{1, 0}, {1, 2}, {3, 1}};
  std::vector<Eigen::MatrixXd> first;
  std::vector<Eigen::MatrixXd> second;
  for (const auto& [plane, axis] : forms) {
    first.emplace_back(Eigen::Vector3d(plane, plane, axis).asDiagonal());
    second.emplace_back(Eigen::Vector4d(axis / 4, 0, 9 * plane, 9 * plane).asDiagonal());
  }
  const Tie found = tie(any_data(3), model_of(first), model_of(second));
  EXPECT_EQ(found.relation, TieRelation::equal);
  EXPECT_EQ(found.proof, TieProof::proved);
}

TEST(TiesTest, SameIntensitiesWithoutALinearMapAreTested) {
  // Lines 1 and 2 see a² + b² and d²; the second candidate has one parameter for the first.
  std::vector<Eigen::MatrixXd> first;
  std::vector<Eigen::MatrixXd> second;
  const double forms[3][2] = {{1, 0}, {1, 2}, {3, 1}};
  for (const auto& [plane, axis] : forms) {
    first.emplace_back(Eigen::Vector3d(plane, plane, axis).asDiagonal());
    second.emplace_back(Eigen::Vector2d(plane, axis).asDiagonal());
  }
  const Tie found = tie(any_data(3), model_of(first), model_of(second));
  EXPECT_EQ(found.relation, TieRelation::equal);
  EXPECT_EQ(found.proof, TieProof::tested);
}

TEST(TiesTest, DifferentFamiliesAreNotTied) {
  RandomDraws random(52);
  for (std::uint64_t trial = 0; trial < 20; ++trial) {
    const Eigen::Index n = 1 + static_cast<Eigen::Index>(trial % 3);
    const std::size_t points = 8;
    const Tie found = tie(any_data(points), model_of(random_forms(random, n, points)),
                          model_of(random_forms(random, n, points)));
    EXPECT_EQ(found.relation, TieRelation::none) << trial;
  }
  // Equal but for one weak line.
  auto forms = random_forms(random, 3, 8);
  auto other = forms;
  other[7] *= 1.001;
  EXPECT_EQ(tie(any_data(8), model_of(forms), model_of(other)).relation, TieRelation::none);
}

TEST(TiesTest, ContainedCandidateIsProvedWithAndWithoutAHint) {
  RandomDraws random(53);
  for (std::uint64_t trial = 0; trial < 8; ++trial) {
    const auto forms = random_forms(random, 3, 9);
    const Eigen::MatrixXd L = random_matrix(random, 3, 2);
    const CandidateModel inner = model_of(carried(forms, L));
    const CandidateModel outer = model_of(forms);
    const FitData data = any_data(9);
    Tie found = tie(data, inner, outer);
    EXPECT_EQ(found.relation, TieRelation::first_within_second) << trial;
    EXPECT_EQ(found.proof, TieProof::proved) << trial;
    found = tie(data, outer, inner);
    EXPECT_EQ(found.relation, TieRelation::second_within_first) << trial;
    TieOptions options;
    options.suggested = {L};
    options.points = 0;
    found = tie(data, inner, outer, options);
    EXPECT_EQ(found.relation, TieRelation::first_within_second) << trial;
    EXPECT_EQ(found.proof, TieProof::proved);
  }
}

TEST(TiesTest, FreeScalesOfFurtherListsDoNotSeparate) {
  RandomDraws random(54);
  const auto forms = random_forms(random, 3, 12);
  auto other = carried(forms, random_matrix(random, 3, 3));
  for (std::size_t s = 6; s < 12; ++s) other[s] *= 7;
  std::vector<MeasuredPoint> points(12);
  for (std::size_t i = 0; i < 12; ++i) {
    points[i].sigma = 1;
    points[i].scale_group = i / 6;
  }
  const Tie apart =
      tie(FitData(points, {ScaleGroup{}, ScaleGroup{}}), model_of(forms), model_of(other));
  EXPECT_EQ(apart.relation, TieRelation::equal);
  EXPECT_EQ(apart.proof, TieProof::proved);
  for (MeasuredPoint& point : points) point.scale_group = 0;
  EXPECT_EQ(tie(FitData(points), model_of(forms), model_of(other)).relation, TieRelation::none);
}

TEST(TiesTest, AgreesWithABruteForceComparison) {
  // Two parameters, three lines: the set of ratios (I₂/I₁, I₃/I₁) is a closed curve. Brute force:
  // sample one curve densely and look for the nearest point of the other.
  RandomDraws random(55);
  const auto ratios = [](const std::vector<Eigen::MatrixXd>& forms, double angle) {
    const Eigen::Vector2d c(std::cos(angle), std::sin(angle));
    const double first = c.dot(forms[0] * c);
    return Eigen::Vector2d(c.dot(forms[1] * c) / first, c.dot(forms[2] * c) / first);
  };
  const int steps = 8000;
  int equal = 0;
  for (std::uint64_t trial = 0; trial < 20; ++trial) {
    std::vector<Eigen::MatrixXd> first;
    const Eigen::MatrixXd one = Eigen::MatrixXd::Identity(2, 2);  // keeps the curves smooth
    for (int s = 0; s < 3; ++s) first.emplace_back(one + cases::random_form(random, 2, 2));
    const Eigen::MatrixXd L = 1.5 * one + 0.4 * random_matrix(random, 2, 2);
    std::vector<Eigen::MatrixXd> second = carried(first, L);
    if (trial % 2 == 1) second[2] += second[1];
    double worst = 0;
    double scale = 0;
    for (int i = 0; i < steps; i += 80) {
      const Eigen::Vector2d at = ratios(first, M_PI * i / steps);
      double nearest = 1e300;
      for (int j = 0; j < steps; ++j)
        nearest = std::min(nearest, (ratios(second, M_PI * j / steps) - at).norm());
      worst = std::max(worst, nearest);
      scale = std::max(scale, at.norm());
    }
    const bool brute = worst < 0.005 * scale;
    const bool tied =
        tie(any_data(3), model_of(first), model_of(second)).relation == TieRelation::equal;
    EXPECT_EQ(tied, brute) << trial << " nearest " << worst << " of " << scale;
    equal += tied ? 1 : 0;
  }
  EXPECT_EQ(equal, 10);
}

TEST(TiesTest, EqualMomentsAreComparedOnTheirOwnSet) {
  // With a² = b² the two lines have one free ratio less: contained in the unconstrained candidate.
  Eigen::MatrixXd a = Eigen::MatrixXd::Zero(2, 2);
  a(0, 0) = 1;
  Eigen::MatrixXd b = Eigen::MatrixXd::Zero(2, 2);
  b(1, 1) = 1;
  const CandidateModel open = model_of({a, b, a + b});
  CandidateModel equal = open;
  equal.equalities.emplace_back(a - b);
  const Tie found = tie(any_data(3), equal, open);
  EXPECT_EQ(found.relation, TieRelation::first_within_second);
  EXPECT_EQ(found.proof, TieProof::tested);
}

}  // namespace
}  // namespace spinsieve
