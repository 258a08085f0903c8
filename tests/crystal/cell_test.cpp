#include "crystal/cell.hpp"

#include <cmath>
#include <limits>
#include <numbers>

#include <gtest/gtest.h>

#include "crystal/space_group.hpp"
#include "exact/error.hpp"

namespace spinsieve {
namespace {

constexpr double pi = std::numbers::pi;

template <typename Body>
std::string message_of(Body body) {
  try {
    body();
  } catch (const Error& error) {
    return error.message();
  }
  return "no error";
}

TEST(CellTest, VolumesAndSpacingsByHand) {
  EXPECT_NEAR(Cell(2, 3, 4, 90, 90, 90).volume(), 24, 1e-12);
  EXPECT_NEAR(Cell(2, 2, 5, 90, 90, 120).volume(), 10 * std::sqrt(3), 1e-12);  // a²c √3/2
  EXPECT_NEAR(Cell(3, 4, 5, 90, 30, 90).volume(), 30, 1e-12);                  // abc sin β
  EXPECT_NEAR(Cell(2, 2, 2, 60, 60, 60).volume(), 4 * std::sqrt(2), 1e-12);    // a³/√2
  // Hexagonal 1/d² = 4/3 (h² + hk + k²)/a² + l²/c².
  const Cell hexagonal(4, 4, 6, 90, 90, 120);
  const double d_squared = 1 / (4.0 / 3 * 7 / 16 + 9.0 / 36);
  EXPECT_NEAR(hexagonal.q({1, 2, 3}), 2 * pi / std::sqrt(d_squared), 1e-12);
  // Monoclinic (001): d = c sin β.
  EXPECT_NEAR(Cell(5, 6, 7, 90, 110, 90).q({0, 0, 1}), 2 * pi / (7 * std::sin(110 * pi / 180)),
              1e-12);
}

TEST(CellTest, FrameAndReciprocalBasisFitTogether) {
  const Cell cell(4.1, 5.7, 7.3, 81, 97, 112);
  const Matrix3& M = cell.orthogonalization();
  const Matrix3& N = cell.fractionalization();
  EXPECT_EQ(M[1][0], 0);  // x along a
  EXPECT_EQ(M[2][0], 0);
  EXPECT_EQ(M[2][1], 0);  // b in the plane of x and y
  EXPECT_GT(M[1][1], 0);
  EXPECT_GT(M[2][2], 0);
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) {
      double unit = 0;
      double dot = 0;
      for (std::size_t k = 0; k < 3; ++k) {
        unit += N[i][k] * M[k][j];
        dot += M[k][i] * M[k][j];
      }
      EXPECT_NEAR(unit, i == j ? 1 : 0, 1e-14);
      EXPECT_NEAR(dot, cell.metric()[i][j], 1e-12);
    }
  EXPECT_NEAR(cell.metric()[0][1], 4.1 * 5.7 * std::cos(112 * pi / 180), 1e-12);
  EXPECT_NEAR(M[0][0] * M[1][1] * M[2][2], cell.volume(), 1e-10);
  // The phase Q · r is 2π (h x + k y + l z).
  const Vector3 Q = cell.scattering_vector({1, -2, 3});
  const Vector3 r = cell.cartesian({0.1, 0.7, 0.4});
  EXPECT_NEAR(Q[0] * r[0] + Q[1] * r[1] + Q[2] * r[2], 2 * pi * (0.1 - 1.4 + 1.2), 1e-12);
}

TEST(CellTest, MomentsKeepTheirLengthAlongUnitAxes) {
  const Cell cell(4, 6, 10, 90, 90, 120);
  const Vector3 lattice = cell.lattice_from_crystal_axes({2, 3, 5});
  EXPECT_NEAR(lattice[0], 0.5, 1e-15);
  EXPECT_NEAR(lattice[1], 0.5, 1e-15);
  EXPECT_NEAR(lattice[2], 0.5, 1e-15);
  EXPECT_NEAR(cell.crystal_axes_from_lattice(lattice)[1], 3, 1e-14);
  // By hand: (2, 3) at 120° has the square 4 + 9 − 6.
  const Vector3 m = cell.cartesian_from_crystal_axes({2, 3, 0});
  EXPECT_NEAR(m[0] * m[0] + m[1] * m[1] + m[2] * m[2], 7, 1e-12);
  EXPECT_NEAR(cell.distance({0.5, 0, 0}), 2, 1e-14);
}

TEST(CellTest, ImpossibleCellsAreRefused) {
  EXPECT_EQ(message_of([] { Cell(0, 1, 1, 90, 90, 90); }),
            "cell length a = 0; it must be positive, in Å");
  EXPECT_EQ(message_of([] { Cell(1, 1, -2.5, 90, 90, 90); }),
            "cell length c = -2.5; it must be positive, in Å");
  EXPECT_EQ(message_of([] { Cell(1, std::numeric_limits<double>::quiet_NaN(), 1, 90, 90, 90); }),
            "cell length b = nan; it must be positive, in Å");
  EXPECT_EQ(message_of([] { Cell(1, 1, 1, 90, 180, 90); }),
            "cell angle β = 180; it must lie between 0 and 180 degrees");
  EXPECT_EQ(message_of([] { Cell(1, 1, 1, 30, 40, 100); }),
            "cell angles 30, 40, 100 close no cell; each must be less than the sum of the others, "
            "and the three together less than 360 degrees");
  EXPECT_NE(message_of([] { Cell(1, 1, 1, 120, 120, 120); }), "no error");
}

TEST(CellTest, ACellThatBreaksTheGroupIsRefusedWithWhatItNeeds) {
  const struct {
    int number;
    Cell cell;
    const char* message;
  } cases[] = {
      {194,
       {3, 3.1, 5, 90, 90, 120},
       "cell 3, 3.1, 5, 90, 90, 120 does not fit P 6_3/m m c; it requires a = b, α = 90°, β = 90°, "
       "γ = 120°"},
      {221,
       {4, 4, 4.1, 90, 90, 90},
       "cell 4, 4, 4.1, 90, 90, 90 does not fit P m -3 m; it requires a = b = c, α = 90°, "
       "β = 90°, γ = 90°"},
      {62,
       {4, 5, 6, 90, 91, 90},
       "cell 4, 5, 6, 90, 91, 90 does not fit P n m a; it requires α = 90°, β = 90°, γ = 90°"},
      {14,
       {4, 5, 6, 92, 91, 90},
       "cell 4, 5, 6, 92, 91, 90 does not fit P 2_1/c; it requires α = 90°, γ = 90°"},
      {136,
       {4, 5, 6, 90, 90, 90},
       "cell 4, 5, 6, 90, 90, 90 does not fit P 4_2/m n m; it requires a = b, α = 90°, β = 90°, "
       "γ = 90°"},
      {166,
       {5, 5, 5, 60, 60, 60},
       "cell 5, 5, 5, 60, 60, 60 has rhombohedral axes, but R -3 m without a suffix means "
       "hexagonal "
       "axes; write 'R -3 m:R' for rhombohedral axes"},
  };
  for (const auto& [number, cell, message] : cases) {
    const SpaceGroup group = SpaceGroup::from_number(number);
    EXPECT_EQ(message_of([&cell = cell, &group] { require_cell_fits(cell, group); }), message);
  }
  EXPECT_EQ(message_of([] {
              require_cell_fits(Cell(5, 5, 6, 60, 60, 60), parse_space_group("R -3 m:R"));
            }),
            "cell 5, 5, 6, 60, 60, 60 does not fit R -3 m; it requires a = b = c, α = β = γ");
}

TEST(CellTest, TheToleranceIsOneInAThousand) {
  const SpaceGroup tetragonal = SpaceGroup::from_number(136);
  require_cell_fits(Cell(4, 4.003, 6, 90, 90, 90), tetragonal);
  EXPECT_THROW(require_cell_fits(Cell(4, 4.005, 6, 90, 90, 90), tetragonal), Error);
  require_cell_fits(Cell(4, 4, 6, 90.02, 90, 90), tetragonal);
  EXPECT_THROW(require_cell_fits(Cell(4, 4, 6, 90.1, 90, 90), tetragonal), Error);
}

TEST(CellTest, EveryGroupFitsACellOfItsSystem) {
  for (int number = 1; number <= 230; ++number) {
    SCOPED_TRACE(number);
    Cell cell(4, 5, 6, 85, 95, 105);
    if (number > 2) cell = Cell(4, 5, 6, 90, 100, 90);
    if (number > 15) cell = Cell(4, 5, 6, 90, 90, 90);
    if (number > 74) cell = Cell(4, 4, 6, 90, 90, 90);
    if (number > 142) cell = Cell(4, 4, 6, 90, 90, 120);
    if (number > 194) cell = Cell(4, 4, 4, 90, 90, 90);
    EXPECT_NO_THROW(require_cell_fits(cell, SpaceGroup::from_number(number)));
  }
}

}  // namespace
}  // namespace spinsieve
