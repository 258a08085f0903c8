#include <algorithm>
#include <array>
#include <cmath>
#include <map>
#include <stdexcept>

#include "crystal/closure.hpp"
#include "crystal/lattice.hpp"
#include "crystal/origin.hpp"
#include "crystal/space_group.hpp"
#include "crystal/space_group_builder.hpp"
#include "crystal/spglib.hpp"
#include "exact/error.hpp"

namespace spinsieve {

namespace {

/// First number of each of the 32 crystal classes, and 231.
constexpr std::array<int, 33> class_starts{1,   2,   3,   6,   10,  16,  25,  47,  75,  81,  83,
                                           89,  99,  111, 123, 143, 147, 149, 156, 162, 168, 174,
                                           175, 177, 183, 187, 191, 195, 200, 207, 215, 221, 231};

/// How often each kind of rotation occurs; determinant and trace name the kind, and the counts
/// name the crystal class (International Tables B, 1.3.4 on geometric classes).
std::map<std::pair<int, int>, int> rotation_counts(const OperationSet& set) {
  std::map<std::pair<int, int>, int> counts;
  for (const Operation& operation : set.representatives)
    ++counts[{determinant(operation.rotation), trace(operation.rotation)}];
  return counts;
}

OperationSet tabulated_set(int hall_number) {
  OperationSet set;
  for (const Operation& operation : hall_operations(hall_number)) {
    if (operation.rotation == Operation{}.rotation) set.centrings.push_back(operation.translation);
    const bool known =
        std::any_of(set.representatives.begin(), set.representatives.end(),
                    [&operation](const Operation& o) { return o.rotation == operation.rotation; });
    if (!known) set.representatives.push_back(operation);
  }
  std::sort(set.centrings.begin(), set.centrings.end());
  return set;
}

bool same_group(const OperationSet& a, const OperationSet& b) {
  return a.representatives.size() == b.representatives.size() && a.centrings == b.centrings &&
         std::all_of(a.representatives.begin(), a.representatives.end(),
                     [&b](const Operation& operation) { return b.contains(operation); });
}

/// The range of numbers of the set's crystal class; empty when the rotations are of no class.
std::pair<int, int> numbers_of_class(const OperationSet& set) {
  const auto counts = rotation_counts(set);
  for (std::size_t i = 0; i + 1 < class_starts.size(); ++i) {
    const int hall_number = first_hall_numbers()[static_cast<std::size_t>(class_starts[i] - 1)];
    if (rotation_counts(tabulated_set(hall_number)) == counts)
      return {class_starts[i], class_starts[i + 1]};
  }
  return {1, 1};
}

/// The tabulated settings that have the set's rotations and as many translations, the standard
/// setting of each number first.
std::vector<int> settings_of_same_rotations(const OperationSet& set) {
  const auto [first, end] = numbers_of_class(set);
  std::vector<int> hall_numbers;
  for (int number = first; number < end; ++number)
    hall_numbers.push_back(standard_hall_number(number));
  const auto hall_of = [](int number) {
    return first_hall_numbers()[static_cast<std::size_t>(number - 1)];
  };
  for (int hall_number = hall_of(first); hall_number < hall_of(end); ++hall_number)
    hall_numbers.push_back(hall_number);
  const std::size_t size = set.representatives.size() * set.centrings.size();
  std::erase_if(hall_numbers, [&set, size](int hall_number) {
    const std::vector<Operation> operations = hall_operations(hall_number);
    return operations.size() != size ||
           !std::all_of(operations.begin(), operations.end(), [&set](const Operation& operation) {
             return set.has_rotation(operation.rotation);
           });
  });
  return hall_numbers;
}

/// A tabulated setting of the same axes: of the same operations if possible, else about another
/// origin.
std::optional<TabulatedSetting> setting_of_same_axes(const OperationSet& set) {
  const std::vector<int> hall_numbers = settings_of_same_rotations(set);
  const FractionMatrix same = to_fractions(Operation{}.rotation);
  for (const int hall_number : hall_numbers)
    if (same_group(set, tabulated_set(hall_number))) return TabulatedSetting{hall_number, same, {}};
  for (const int hall_number : hall_numbers)
    if (const auto shift = shift_between(set, tabulated_set(hall_number)))
      return TabulatedSetting{hall_number, same, *shift};
  return std::nullopt;
}

FractionMatrix rounded_inverse(const std::array<std::array<double, 3>, 3>& T) {
  const double det = T[0][0] * (T[1][1] * T[2][2] - T[1][2] * T[2][1]) -
                     T[0][1] * (T[1][0] * T[2][2] - T[1][2] * T[2][0]) +
                     T[0][2] * (T[1][0] * T[2][1] - T[1][1] * T[2][0]);
  FractionMatrix result;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) {
      const std::size_t r = (j + 1) % 3;
      const std::size_t s = (j + 2) % 3;
      const std::size_t p = (i + 1) % 3;
      const std::size_t q = (i + 2) % 3;
      result[i][j] =
          static_cast<std::int64_t>(std::llround((T[r][p] * T[s][q] - T[r][q] * T[s][p]) / det));
    }
  return result;
}

/// A decorated crystal whose symmetry is the set's: two general orbits on a generic metric.
std::optional<TabulatedSetting> found_by_search(const OperationSet& set, std::uint64_t seed) {
  FractionMatrix basis = lattice_basis(set.centrings);
  OperationSet primitive = transformed(set, inverse(transpose(basis)), {});
  const auto rotations_of = [](const OperationSet& of) {
    std::vector<IntMatrix> rotations;
    for (const Operation& operation : of.representatives) rotations.push_back(operation.rotation);
    return rotations;
  };
  const IntMatrix shortest =
      reduced_basis(averaged_metric(rotations_of(primitive), generic_metric));
  basis = product(to_fractions(shortest), basis);
  primitive = transformed(set, inverse(transpose(basis)), {});
  const IntMetric G = averaged_metric(rotations_of(primitive), generic_metric);
  const auto found = search_symmetry(primitive.representatives, G, seed);
  if (!found) return std::nullopt;
  const int hall_number = standard_hall_number(found->number);
  const OperationSet tabulated = tabulated_set(hall_number);
  // Axes of the tabulated cell are lattice vectors, hence integer in the primitive basis.
  const FractionMatrix axes = rounded_inverse(found->transformation);
  if (determinant(axes) <= Fraction(0)) return std::nullopt;
  const FractionMatrix T = inverse(axes);
  TabulatedSetting result;
  result.hall_number = hall_number;
  result.transformation = product(T, inverse(transpose(basis)));
  try {
    const auto shift = shift_between(transformed(primitive, T, {}), tabulated);
    if (!shift) return std::nullopt;
    result.shift = *shift;
    if (!same_group(transformed(set, result.transformation, result.shift), tabulated))
      return std::nullopt;
  } catch (const std::logic_error&) {
    return std::nullopt;  // The transformation found does not suit the group.
  }
  return result;
}

std::optional<TabulatedSetting> identified(const OperationSet& set) {
  if (auto found = setting_of_same_axes(set)) return found;
  constexpr std::uint64_t attempts = 8;
  for (std::uint64_t seed = 1; seed <= attempts; ++seed)
    if (auto found = found_by_search(set, seed)) return found;
  return std::nullopt;
}

/// "x-1/4,y,z" for x_tabulated = transformation · x + shift; factors in front: "1/2x+1/2y".
std::string change_of_axes_text(const TabulatedSetting& setting) {
  std::string text;
  for (std::size_t i = 0; i < 3; ++i) {
    std::string part;
    const auto add = [&part](Fraction factor, std::string_view name) {
      if (factor.is_zero()) return;
      if (factor > Fraction(0) && !part.empty()) part += "+";
      if (name.empty() || (factor != Fraction(1) && factor != Fraction(-1)))
        part += to_string(factor);
      else if (factor == Fraction(-1))
        part += "-";
      part += name;
    };
    for (std::size_t j = 0; j < 3; ++j)
      add(setting.transformation[i][j], std::string_view("xyz").substr(j, 1));
    add(setting.shift[i], "");
    text += (i > 0 ? "," : "") + part;
  }
  return text;
}

/// True when 24 times every translation is a lattice vector.
bool has_simple_translations(const OperationSet& set) {
  return std::all_of(set.representatives.begin(), set.representatives.end(),
                     [&set](const Operation& operation) {
                       return set.in_lattice(Fraction(24) * operation.translation);
                     });
}

std::string unidentified_text(const OperationSet& set) {
  std::string text = "these operations form a space group that was not identified, please report:";
  for (const Operation& operation : set.representatives) text += " " + to_string(operation);
  return text;
}

}  // namespace

std::optional<TabulatedSetting> identify_setting(std::span<const Operation> operations) {
  return identified(closure(operations));
}

SpaceGroup SpaceGroup::from_operations(std::span<const Operation> operations) {
  const OperationSet set = closure(operations);
  const auto setting = identified(set);
  if (!setting) throw std::logic_error(unidentified_text(set));
  if (setting->transformation == to_fractions(Operation{}.rotation) &&
      setting->shift == FractionVector{})
    return from_hall_number(setting->hall_number);
  // The tabulated order of operations is kept, so that equal groups list alike.
  const FractionMatrix back = spinsieve::inverse(setting->transformation);
  const OperationSet own = transformed(tabulated_set(setting->hall_number), back,
                                       FractionVector{} - times(back, setting->shift));
  HallSetting names = hall_setting(setting->hall_number);
  names.hall_number = 0;
  names.choice = change_of_axes_text(*setting);
  const FractionVector tabulated_origin = FractionVector{} - times(back, setting->shift);
  return SpaceGroupBuilder::from_representatives(
      std::move(names), own.representatives, own.centrings,
      has_simple_translations(own) ? FractionVector{} : tabulated_origin);
}

}  // namespace spinsieve
