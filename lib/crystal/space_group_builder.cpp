#include "crystal/space_group_builder.hpp"

#include <algorithm>
#include <stdexcept>

#include "exact/error.hpp"

namespace spinsieve {

namespace {

constexpr IntMatrix identity{{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}};

constexpr int largest_entry = 15;

/// A number for each rotation with entries within ±largest_entry, distinct for distinct rotations.
std::uint64_t rotation_key(const IntMatrix& R) {
  std::uint64_t key = 0;
  for (const IntVector& row : R)
    for (const int entry : row) key = key << 5U | static_cast<std::uint64_t>(entry + largest_entry);
  return key;
}

}  // namespace

SpaceGroup SpaceGroupBuilder::from_setting(HallSetting setting,
                                           const std::vector<Operation>& operations) {
  std::vector<Operation> representatives;
  std::vector<std::uint64_t> keys;
  std::vector<FractionVector> centrings;
  representatives.reserve(48);
  keys.reserve(48);
  for (const Operation& operation : operations) {
    const std::uint64_t key = rotation_key(operation.rotation);
    if (operation.rotation == identity) centrings.push_back(operation.translation);
    if (std::find(keys.begin(), keys.end(), key) != keys.end()) continue;
    keys.push_back(key);
    representatives.push_back(operation);
  }
  return from_representatives(std::move(setting), std::move(representatives), std::move(centrings));
}

SpaceGroup SpaceGroupBuilder::from_representatives(HallSetting setting,
                                                   std::vector<Operation> operations,
                                                   std::vector<FractionVector> centrings,
                                                   const FractionVector& origin_shift) {
  for (const Operation& operation : operations)
    for (const IntVector& row : operation.rotation)
      for (const int entry : row)
        if (entry < -largest_entry || entry > largest_entry)
          throw Error("operation " + to_string(operation) +
                      " has factors beyond 15; less skewed axes are needed");
  SpaceGroup group;
  group.number_ = setting.number;
  group.hall_number_ = setting.hall_number;
  group.symbol_ = std::move(setting.symbol_full);
  group.short_symbol_ = std::move(setting.symbol_short);
  group.hall_symbol_ = std::move(setting.hall_symbol);
  group.setting_ = std::move(setting.choice);
  std::sort(centrings.begin(), centrings.end());
  group.centrings_ = std::move(centrings);
  group.operations_ = std::move(operations);
  group.origin_shift_ = group.lattice_reduced(origin_shift);
  for (Operation& operation : group.operations_)
    operation.translation = group.lattice_reduced(operation.translation);
  fill_products(group);
  return group;
}

/// Matrix products with a few generators only; every other product follows from
/// a·(b·g) = (a·b)·g.
void SpaceGroupBuilder::fill_products(SpaceGroup& group) {
  const std::size_t order = group.operations_.size();
  std::vector<std::uint64_t> keys(order);
  for (std::size_t i = 0; i < order; ++i) keys[i] = rotation_key(group.operations_[i].rotation);
  const auto index_of = [&keys](const IntMatrix& R) {
    const auto found = std::find(keys.begin(), keys.end(), rotation_key(R));
    if (found == keys.end()) throw std::logic_error("rotations are not closed; please report");
    return static_cast<std::uint8_t>(found - keys.begin());
  };
  group.product_.assign(order * order, 0);
  for (std::size_t a = 0; a < order; ++a) group.product_[a * order] = static_cast<std::uint8_t>(a);
  std::vector<std::uint8_t> reached{0};
  std::vector<bool> known(order, false);
  known[0] = true;
  std::vector<std::vector<std::uint8_t>> times_generator;
  std::vector<std::uint8_t> generators;
  // Column b·g of the table from column b.
  const auto extend = [&](std::size_t b, std::size_t g) {
    const std::uint8_t next = times_generator[g][b];
    if (known[next]) return;
    known[next] = true;
    reached.push_back(next);
    for (std::size_t a = 0; a < order; ++a)
      group.product_[a * order + next] = times_generator[g][group.product_[a * order + b]];
  };
  for (std::size_t candidate = 1; candidate < order; ++candidate) {
    if (known[candidate]) continue;
    std::vector<std::uint8_t> images(order);
    for (std::size_t a = 0; a < order; ++a)
      images[a] = index_of(
          spinsieve::product(group.operations_[a].rotation, group.operations_[candidate].rotation));
    times_generator.push_back(std::move(images));
    // NOLINTNEXTLINE(modernize-loop-convert): the list grows while it is walked.
    for (std::size_t i = 0; i < reached.size(); ++i)
      for (std::size_t g = 0; g < times_generator.size(); ++g) extend(reached[i], g);
  }
  group.inverse_.assign(order, 0);
  for (std::size_t a = 0; a < order; ++a)
    for (std::size_t b = 0; b < order; ++b)
      if (group.product_[a * order + b] == 0) group.inverse_[a] = static_cast<std::uint8_t>(b);
}

const std::array<int, 231>& first_hall_numbers() {
  static const std::array<int, 231> first = [] {
    std::array<int, 231> result{};
    for (int hall = 530; hall >= 1; --hall)
      result[static_cast<std::size_t>(hall_setting(hall).number - 1)] = hall;
    result[230] = 531;
    return result;
  }();
  return first;
}

int standard_hall_number(int number) {
  if (number < 1 || number > 230)
    throw Error("space-group number " + std::to_string(number) + "; it must lie within 1 to 230");
  const auto index = static_cast<std::size_t>(number - 1);
  const int first = first_hall_numbers()[index];
  for (int hall = first; hall < first_hall_numbers()[index + 1]; ++hall) {
    const std::string choice = hall_setting(hall).choice;
    if (choice.empty() || choice == "b" || choice == "b1" || choice == "2" || choice == "H")
      return hall;
  }
  throw std::logic_error("no standard setting of number " + std::to_string(number));
}

}  // namespace spinsieve
