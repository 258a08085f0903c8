#pragma once

#include <vector>

#include "crystal/space_group.hpp"
#include "crystal/spglib.hpp"

namespace spinsieve {

/// Puts space groups together: the part of SpaceGroup that fills its tables.
class SpaceGroupBuilder {
 public:
  /// From a tabulated setting and all its operations, centrings included, identity first.
  static SpaceGroup from_setting(HallSetting setting, const std::vector<Operation>& operations);

  /// From representatives with distinct rotations, identity first, the centrings, and the shift
  /// told by SpaceGroup::origin_shift. Throws Error when a rotation has an entry beyond ±15.
  static SpaceGroup from_representatives(HallSetting setting, std::vector<Operation> operations,
                                         std::vector<FractionVector> centrings,
                                         const FractionVector& origin_shift = {});

 private:
  static void fill_products(SpaceGroup& group);
};

/// The setting of International Tables A for a number: unique axis b and cell choice 1, hexagonal
/// axes, origin 2. Throws Error outside 1 … 230.
int standard_hall_number(int number);

/// First hall number of each space-group type 1 … 230, at index number − 1, and 531 at the end.
const std::array<int, 231>& first_hall_numbers();

}  // namespace spinsieve
