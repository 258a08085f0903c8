#include "arrangement/magnetic_point_group.hpp"

#include <algorithm>
#include <array>
#include <map>
#include <string_view>

#include "arrangement/embedded_data.hpp"
#include "exact/error.hpp"

namespace spinsieve {
namespace {

bool contains(const std::vector<PrimedRotation>& operations, const PrimedRotation& operation) {
  return std::ranges::find(operations, operation) != operations.end();
}

/// Adds a generator to a closed set and closes it again.
void extend(std::vector<PrimedRotation>& closed, std::vector<PrimedRotation>& generators,
            const PrimedRotation& generator) {
  generators.push_back(generator);
  for (std::size_t i = 0; i < closed.size(); ++i)
    for (const auto& g : generators)
      if (const PrimedRotation next = closed[i] * g; !contains(closed, next))
        closed.push_back(next);
}

/// How many operations there are of each kind: kinds are determinant, trace and prime.
using Census = std::map<std::array<int, 3>, int>;

Census census(std::span<const PrimedRotation> operations) {
  Census result;
  for (const auto& [rotation, primed] : operations)
    ++result[{determinant(rotation), trace(rotation), primed ? 1 : 0}];
  return result;
}

std::string_view next_field(std::string_view& text, char separator) {
  const std::string_view field = text.substr(0, text.find(separator));
  text.remove_prefix(std::min(field.size() + 1, text.size()));
  return field;
}

std::vector<TabulatedPointGroup> parse_table(std::string_view text) {
  std::vector<TabulatedPointGroup> result;
  while (!text.empty()) {
    std::string_view line = next_field(text, '\n');
    if (line.empty() || line.front() == '#' || line.starts_with("symbol")) continue;
    TabulatedPointGroup row;
    row.symbol = std::string(next_field(line, '|'));
    row.type = next_field(line, '|').front() - '0';
    row.operations = {PrimedRotation{}};
    std::vector<PrimedRotation> generators;
    while (!line.empty()) {
      std::string_view generator = next_field(line, ' ');
      const bool primed = generator.back() == '\'';
      if (primed) generator.remove_suffix(1);
      extend(row.operations, generators, {parse_operation(generator).rotation, primed});
    }
    result.push_back(std::move(row));
  }
  return result;
}

std::map<Census, std::size_t> table_by_census() {
  std::map<Census, std::size_t> result;
  const auto groups = magnetic_point_groups();
  for (std::size_t i = 0; i < groups.size(); ++i) result[census(groups[i].operations)] = i;
  return result;
}

}  // namespace

std::vector<PrimedRotation> point_operations(std::span<const PrimedOperation> operations) {
  std::vector<PrimedRotation> result;
  for (const auto& [operation, primed] : operations)
    if (const PrimedRotation point{operation.rotation, primed}; !contains(result, point))
      result.push_back(point);
  return result;
}

MagneticPointGroup::MagneticPointGroup(std::span<const PrimedRotation> operations)
    : operations_(operations.begin(), operations.end()) {
  static const std::map<Census, std::size_t> table = table_by_census();
  const auto found = table.find(census(operations_));
  if (found == table.end())
    throw Error("the " + std::to_string(operations_.size()) +
                " rotations given are not a magnetic point group");
  symbol_ = magnetic_point_groups()[found->second].symbol;
  type_ = magnetic_point_groups()[found->second].type;
}

std::size_t MagneticPointGroup::rotation_count() const {
  return type_ == 2 ? operations_.size() / 2 : operations_.size();
}

std::vector<PrimedRotation> MagneticPointGroup::generators() const {
  std::vector<PrimedRotation> closed = {PrimedRotation{}};
  std::vector<PrimedRotation> result;
  for (const auto& operation : operations_)
    if (!contains(closed, operation)) extend(closed, result, operation);
  return result;
}

std::span<const TabulatedPointGroup> magnetic_point_groups() {
  static const std::vector<TabulatedPointGroup> groups = parse_table(data_magnetic_point_groups);
  return groups;
}

}  // namespace spinsieve
