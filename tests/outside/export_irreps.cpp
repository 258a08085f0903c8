// Writes the small irreps of many (group, k) as a GAP list, for compare_characters.g to judge.
//
// export_irreps sample|all > cases.g

#include <algorithm>
#include <iostream>
#include <memory>
#include <string>

#include "gap_cases.hpp"
#include "symmetry/strata.hpp"

namespace {

using namespace spinsieve;

/// k with u, v, w replaced by fractions of small denominator, so that the quotient stays small.
Wavevector small_point(const Wavevector& k) {
  constexpr std::array<int, 3> parts{7, 5, 3};
  Wavevector result(k.constant);
  for (std::size_t p = 0; p < 3; ++p)
    result.constant = result.constant + Fraction(1, parts[p]) * k.along[p];
  return result;
}

/// Every seventh group and those whose points need dense matrices or show pseudoreal irreps.
bool in_sample(int number) {
  constexpr std::array<int, 14> notable{14,  19,  62,  92,  185, 194, 198,
                                        205, 212, 214, 220, 227, 228, 230};
  return number % 7 == 0 || std::find(notable.begin(), notable.end(), number) != notable.end();
}

}  // namespace

int main(int argc, char** argv) {
  const std::string choice = argc == 2 ? argv[1] : "";
  if (choice != "sample" && choice != "all") {
    std::cerr << "usage: export_irreps sample|all\n";
    return 2;
  }
  const bool all = choice == "all";
  {
    GapCases cases(std::cout);
    for (int number = 1; number <= 230; ++number) {
      if (!all && !in_sample(number)) continue;
      const auto tables = std::make_shared<const SymmetryTables>(SpaceGroup::from_number(number));
      int lines = 0;  // The sample takes one line of each group and no plane.
      for (const Stratum& stratum : strata(*tables)) {
        if (stratum.kind == StratumKind::general) continue;
        if (!all && stratum.kind == StratumKind::plane) continue;
        if (!all && stratum.kind == StratumKind::line && ++lines > 1) continue;
        cases.add(LittleGroup(tables, small_point(stratum.k)));
      }
    }
  }
  return std::cout.good() ? 0 : 1;
}
