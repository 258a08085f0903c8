#include "scattering/form_factor.hpp"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "scattering/free_ion.hpp"

namespace spinsieve {
namespace {

using testing::HasSubstr;
using testing::ThrowsMessage;

MagneticIon ion(const char* text) {
  MagneticIon result;
  result.ion = parse_ion(text);
  return result;
}

TEST(FormFactorTest, WeightFollowsTheLandeFactorOfTheHundTerm) {
  const struct {
    const char* name;
    double c2;
  } cases[] = {
      // Marshall & Lovesey (1971), c2 = 2/g - 1 with the textbook g of the ground term.
      {"Ce3+", 4.0 / 3}, {"Nd3+", 7.0 / 4}, {"Gd3+", 0},       {"Tb3+", 1.0 / 3},
      {"Dy3+", 0.5},     {"Ho3+", 0.6},     {"Er3+", 2.0 / 3}, {"Tm3+", 5.0 / 7},
      {"Yb3+", 0.75},    {"Eu2+", 0},       {"U3+", 7.0 / 4},  // 5f3: g = 8/11 as 4f3
      {"Mn2+", 0},       {"Fe3+", 0},       {"Ru1+", 0},
  };
  for (const auto& [name, c2] : cases) {
    SCOPED_TRACE(name);
    EXPECT_DOUBLE_EQ(orbital_weight(ion(name)).c2, c2);
  }
}

TEST(FormFactorTest, GivenFactorsHaveOppositeSigns) {
  MagneticIon given = ion("Co2+");
  given.spin_g = 2.4;
  EXPECT_NEAR(orbital_weight(given).c2, 1 - 2 / 2.4, 1e-15);
  given.spin_g.reset();
  given.lande_g = 1.25;
  EXPECT_NEAR(orbital_weight(given).c2, 2 / 1.25 - 1, 1e-15);
  given.lande_g.reset();
  given.c2 = 0.4;
  EXPECT_DOUBLE_EQ(orbital_weight(given).c2, 0.4);
  const double s = 0.3;
  const FormFactor f(given);
  const FormFactor spin_only(ion("Co2+"));
  const auto& table = tabulated_integrals();
  const auto entry = std::find_if(table.begin(), table.end(),
                                  [](const auto& e) { return to_string(e.ion) == "Co2+"; });
  ASSERT_NE(entry, table.end());
  EXPECT_NEAR(f(s) - spin_only(s), 0.4 * radial_integral(2, *entry->j2, s), 1e-15);
}

TEST(FormFactorTest, UserCoefficientsReplaceTheTable) {
  MagneticIon own = ion("Os5+");
  own.j0 = RadialCoefficients{1, 10, 0, 1, 0, 1, 0};
  EXPECT_NEAR(FormFactor(own)(0.2), std::exp(-10 * 0.04), 1e-15);
  MagneticIon praseodymium = ion("Pr3+");
  praseodymium.j2 = RadialCoefficients{2, 10, 0, 1, 0, 1, 0};
  const double j0 = FormFactor([] {
    MagneticIon i = ion("Pr3+");
    i.c2 = 0;
    return i;
  }())(0.2);
  // 4f2: g = 4/5, c2 = 3/2.
  EXPECT_NEAR(FormFactor(praseodymium)(0.2), j0 + 1.5 * 0.04 * 2 * std::exp(-0.4), 1e-14);
}

TEST(FormFactorTest, ErrorsNameTheRemedy) {
  const auto message = [](const MagneticIon& i) { return [i] { FormFactor{i}; }; };
  EXPECT_THAT(message(ion("Mn7+")),
              ThrowsMessage<Error>(
                  HasSubstr("no form factor for Mn7+; tabulated: Mn, Mn1+, Mn2+, Mn3+, Mn4+")));
  EXPECT_THAT(message(ion("Cs+")), ThrowsMessage<Error>(HasSubstr("no ion of Cs is tabulated")));
  EXPECT_THAT(message(ion("Pr3+")),
              ThrowsMessage<Error>(HasSubstr("<j2> of Pr3+ is not tabulated")));
  EXPECT_THAT(message(ion("Eu3+")), ThrowsMessage<Error>(HasSubstr("J = 0")));
  EXPECT_THAT(message(ion("U4+")), ThrowsMessage<Error>(HasSubstr("no default weight")));
  MagneticIon twice = ion("Co2+");
  twice.c2 = 0.1;
  twice.spin_g = 2.2;
  EXPECT_THAT(message(twice), ThrowsMessage<Error>(HasSubstr("more than one of lande_g")));
  MagneticIon negative = ion("Co2+");
  negative.spin_g = -1;
  negative.place = Place(std::make_shared<const std::string>("job.yaml"), 7, 19);
  EXPECT_THAT(message(negative),
              ThrowsMessage<Error>(HasSubstr("job.yaml:7:19: error: spin_g -1")));
}

TEST(FormFactorTest, TableIsComplete) {
  const auto& table = tabulated_integrals();
  ASSERT_EQ(table.size(), 97U);  // ions of International Tables C 4.4.5 with O+
  std::size_t with_j6 = 0;
  for (const TabulatedIntegrals& entry : table) {
    SCOPED_TRACE(to_string(entry.ion));
    ASSERT_TRUE(entry.j0);
    EXPECT_NEAR(radial_integral(0, *entry.j0, 0), 1, 5e-3);  // the fits are that good
    const bool alone = to_string(entry.ion) == "Pr3+" || entry.ion.element == "O";
    EXPECT_EQ(entry.j2.has_value(), !alone);
    EXPECT_EQ(entry.j4.has_value(), !alone);
    if (entry.j6) ++with_j6;
    // A wrong digit in a coefficient breaks smoothness or size somewhere on the way out.
    for (double s = 0; s <= 1.5; s += 0.05) {
      EXPECT_LT(std::abs(radial_integral(0, *entry.j0, s)), 1.01);
      if (entry.j2) {
        EXPECT_LT(std::abs(radial_integral(2, *entry.j2, s)), 0.5);
      }
      if (entry.j4) {
        EXPECT_LT(std::abs(radial_integral(4, *entry.j4, s)), 0.3);
      }
      if (entry.j6) {
        EXPECT_LT(std::abs(radial_integral(6, *entry.j6, s)), 0.3);
      }
    }
  }
  EXPECT_EQ(with_j6, 38U);
}

TEST(FreeIonTest, HundTermsOfTheLanthanoids) {
  const struct {
    int electrons;
    const char* S;
    int L;
    const char* J;
    const char* g;      // "" for J = 0
    double saturation;  // g J
    double paramagnetic;
  } cases[] = {
      // Kittel, Introduction to Solid State Physics, table of trivalent lanthanoids; van Vleck.
      {1, "1/2", 3, "5/2", "6/7", 15.0 / 7, 2.54},
      {2, "1", 5, "4", "4/5", 3.2, 3.58},
      {3, "3/2", 6, "9/2", "8/11", 36.0 / 11, 3.62},
      {4, "2", 6, "4", "3/5", 2.4, 2.68},
      {5, "5/2", 5, "5/2", "2/7", 5.0 / 7, 0.85},
      {6, "3", 3, "0", "", 0, 0},
      {7, "7/2", 0, "7/2", "2", 7, 7.94},
      {8, "3", 3, "6", "3/2", 9, 9.72},
      {9, "5/2", 5, "15/2", "4/3", 10, 10.65},
      {10, "2", 6, "8", "5/4", 10, 10.61},
      {11, "3/2", 6, "15/2", "6/5", 9, 9.58},
      {12, "1", 5, "6", "7/6", 7, 7.56},
      {13, "1/2", 3, "7/2", "8/7", 4, 4.54},
      {14, "0", 0, "0", "", 0, 0},
  };
  for (const auto& expected : cases) {
    SCOPED_TRACE(expected.electrons);
    const HundTerm term = hund_term(3, expected.electrons);
    EXPECT_EQ(to_string(term.S), expected.S);
    EXPECT_EQ(term.L, expected.L);
    EXPECT_EQ(to_string(term.J), expected.J);
    const std::optional<Fraction> g = term.lande_g();
    EXPECT_EQ(g ? to_string(*g) : "", expected.g);
    EXPECT_NEAR(term.saturation_moment(), expected.saturation, 1e-12);
    EXPECT_NEAR(term.paramagnetic_moment(), expected.paramagnetic, 0.006);
  }
}

TEST(FreeIonTest, SpinOnlyMomentsOf3dIons) {
  const struct {
    const char* name;
    double saturation, paramagnetic;  // µB; Kittel, Introduction to Solid State Physics
  } cases[] = {{"Ti3+", 1, 1.73}, {"V3+", 2, 2.83},  {"Cr3+", 3, 3.87}, {"Mn3+", 4, 4.90},
               {"Fe3+", 5, 5.92}, {"Mn2+", 5, 5.92}, {"Fe2+", 4, 4.90}, {"Co2+", 3, 3.87},
               {"Ni2+", 2, 2.83}, {"Cu2+", 1, 1.73}};
  for (const auto& [name, saturation, paramagnetic] : cases) {
    SCOPED_TRACE(name);
    EXPECT_NEAR(spin_only_saturation_moment(parse_ion(name)).value(), saturation, 1e-12);
    EXPECT_NEAR(spin_only_paramagnetic_moment(parse_ion(name)).value(), paramagnetic, 0.006);
  }
  EXPECT_FALSE(spin_only_saturation_moment(parse_ion("Gd3+")));
  EXPECT_FALSE(spin_only_saturation_moment(parse_ion("Mn")));
}

}  // namespace
}  // namespace spinsieve
