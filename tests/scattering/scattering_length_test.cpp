#include "scattering/scattering_length.hpp"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

namespace spinsieve {
namespace {

using testing::HasSubstr;
using testing::ThrowsMessage;

TEST(ScatteringLengthTest, PrintedValues) {
  const struct {
    const char* nuclide;
    double length, absorption;
  } cases[] = {
      // Sears (1992), Neutron News 3(3), 26, from memory; manganese: Rauch & Waschkowski.
      {"Mn", -3.75, 13.3},   {"O", 5.803, 0.00019},  {"Fe", 9.45, 2.56},
      {"Ni", 10.3, 4.49},    {"7Li", -2.22, 0.0454}, {"D", 6.67, 0.000519},
      {"H", -3.739, 0.3326}, {"Cu", 7.718, 3.78},    {"62Ni", -8.7, 14.5},
  };
  for (const auto& [nuclide, length, absorption] : cases) {
    SCOPED_TRACE(nuclide);
    const ScatteringLength b = scattering_length(nuclide);
    EXPECT_NEAR(b.length_fm, length, 0.01);
    EXPECT_NEAR(b.absorption_barn, absorption, 0.01 * absorption);
  }
}

TEST(ScatteringLengthTest, AbsorptionGivesTheImaginaryPart) {
  // Rauch & Waschkowski list b = 5.30 - 0.213i fm for boron.
  EXPECT_NEAR(scattering_length("B").complex_length_fm().imag(), -0.213, 5e-4);
  EXPECT_NEAR(scattering_length("Cd").complex_length_fm().imag(), -0.70, 5e-3);
}

TEST(ScatteringLengthTest, UnknownNuclidesNameTheTabulatedOnes) {
  EXPECT_THAT(
      [] { scattering_length("5Li"); },
      ThrowsMessage<Error>(HasSubstr("no scattering length for \"5Li\"; tabulated: Li, 6Li, 7Li")));
  EXPECT_THAT([] { scattering_length("Xx"); }, ThrowsMessage<Error>(HasSubstr("such as 7Li")));
}

TEST(ScatteringLengthTest, StrongAbsorbersAreNamed) {
  for (const char* element : {"Cd", "Sm", "Eu", "Gd", "Dy", "157Gd"})
    EXPECT_TRUE(absorber_warning(element)) << element;
  for (const char* element : {"Mn", "O", "7Li"}) EXPECT_FALSE(absorber_warning(element)) << element;
}

}  // namespace
}  // namespace spinsieve
