#pragma once

#include <array>
#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "crystal/lattice.hpp"
#include "crystal/operation.hpp"

namespace spinsieve {

/// The only door to spglib. Calls are serialised (its error state is one static), memory is owned
/// here, failures become Error or an empty optional. Its floating translations are rounded to
/// exact fractions of denominator ≤ 24 and that rounding is verified.

struct HallSetting {
  int hall_number = 0;
  int number = 0;
  std::string symbol_short;  ///< "P n m a"
  std::string symbol_full;   ///< "P 2_1/n 2_1/m 2_1/a"
  std::string hall_symbol;   ///< "-P 2ac 2n"
  std::string choice;        ///< "cab", "2", "H", …
};

HallSetting hall_setting(int hall_number);
/// All operations of the setting, centrings included.
std::vector<Operation> hall_operations(int hall_number);

struct TabulatedSetting {
  int hall_number = 0;
  /// x_tabulated = transformation · x + shift, exact.
  std::array<FractionVector, 3> transformation;
  FractionVector shift;
};

/// The tabulated setting a closed list of operations belongs to, proved by exact transformation.
std::optional<TabulatedSetting> identify_setting(std::span<const Operation> operations);

/// What the symmetry search reports: the number and, floating, the axes of its standard setting:
/// x_tabulated = transformation · x + some shift.
struct FoundSymmetry {
  int number = 0;
  std::array<std::array<double, 3>, 3> transformation;
};

/// Searches the symmetry of a made-up crystal whose group is the given one: two general orbits,
/// drawn by the seed, on a primitive cell of metric G. One operation per rotation, primitive axes.
std::optional<FoundSymmetry> search_symmetry(std::span<const Operation> operations,
                                             const IntMetric& G, std::uint64_t seed);

/// One type of magnetic space group of the database, by UNI number 1 … 1651.
struct MagneticType {
  int uni_number = 0;
  std::string bns_number;
  std::string og_number;
  int number = 0;  ///< Leading space-group number.
  int type = 0;    ///< 1 … 4.
};

struct PrimedOperation {
  Operation operation;
  bool primed = false;  ///< Combined with time reversal.
};

MagneticType magnetic_type(int uni_number);
/// All operations in the standard BNS setting (or that of a hall_number), centrings included.
std::vector<PrimedOperation> magnetic_operations(int uni_number, int hall_number = 0);

}  // namespace spinsieve
