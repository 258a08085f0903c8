#include "exact/fraction.hpp"
#include "report/version.hpp"

int main() {
  const spinsieve::Fraction third = spinsieve::parse_fraction("1/3");
  return third * spinsieve::Fraction(3) == spinsieve::Fraction(1) && !spinsieve::version().empty()
             ? 0
             : 1;
}
