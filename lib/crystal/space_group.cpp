#include "crystal/space_group.hpp"

#include <algorithm>

#include "crystal/space_group_builder.hpp"
#include "crystal/spglib.hpp"
#include "exact/error.hpp"

namespace spinsieve {

SpaceGroup SpaceGroup::from_hall_number(int hall_number) {
  return SpaceGroupBuilder::from_setting(hall_setting(hall_number), hall_operations(hall_number));
}

SpaceGroup SpaceGroup::from_number(int number) {
  return from_hall_number(standard_hall_number(number));
}

std::optional<std::size_t> SpaceGroup::find_rotation(const IntMatrix& R) const {
  for (std::size_t i = 0; i < operations_.size(); ++i)
    if (operations_[i].rotation == R) return i;
  return std::nullopt;
}

bool SpaceGroup::in_lattice(const FractionVector& v) const {
  if (is_integer(v)) return true;
  const FractionVector reduced = modulo_one(v);
  return std::find(centrings_.begin() + 1, centrings_.end(), reduced) != centrings_.end();
}

FractionVector SpaceGroup::lattice_reduced(const FractionVector& v) const {
  FractionVector smallest = modulo_one(v);
  const FractionVector start = smallest;
  for (std::size_t i = 1; i < centrings_.size(); ++i) {
    const FractionVector image = modulo_one(start + centrings_[i]);
    if (image < smallest) smallest = image;
  }
  return smallest;
}

bool SpaceGroup::in_reciprocal_lattice(const FractionVector& k) const {
  if (!is_integer(k)) return false;
  for (std::size_t i = 1; i < centrings_.size(); ++i)
    if (!dot(k, centrings_[i]).is_integer()) return false;
  return true;
}

bool SpaceGroup::is_centrosymmetric() const {
  constexpr IntMatrix inversion{{{-1, 0, 0}, {0, -1, 0}, {0, 0, -1}}};
  return find_rotation(inversion).has_value();
}

bool SpaceGroup::is_polar() const {
  // The sum over the group projects on the kept directions.
  IntMatrix sum{};
  for (const Operation& operation : operations_)
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < 3; ++j) sum[i][j] += operation.rotation[i][j];
  return sum != IntMatrix{};
}

}  // namespace spinsieve
