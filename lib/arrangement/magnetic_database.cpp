#include "arrangement/magnetic_database.hpp"

#include <algorithm>
#include <array>
#include <charconv>
#include <map>
#include <mutex>
#include <string>

#include "arrangement/embedded_data.hpp"
#include "exact/error.hpp"

namespace spinsieve {
namespace {

constexpr int type_count = 1651;

std::vector<MagneticSymbols> parse_symbols(std::string_view text) {
  std::vector<MagneticSymbols> result;
  result.reserve(type_count);
  while (!text.empty()) {
    const std::string_view line = text.substr(0, text.find('\n'));
    text.remove_prefix(std::min(line.size() + 1, text.size()));
    if (line.empty() || line.front() == '#' || line.starts_with("uni_number")) continue;
    std::array<std::string_view, 6> fields;
    std::string_view rest = line;
    for (auto& field : fields) {
      field = rest.substr(0, rest.find(','));
      rest.remove_prefix(std::min(field.size() + 1, rest.size()));
    }
    int type = 0;
    std::from_chars(fields[1].data(), fields[1].data() + fields[1].size(), type);
    result.push_back({type, fields[2], fields[3], fields[4], fields[5]});
  }
  return result;
}

void require_type_number(int uni_number) {
  if (uni_number < 1 || uni_number > type_count)
    throw Error("magnetic group number " + std::to_string(uni_number) +
                "; it must be from 1 to 1651");
}

/// Running number of the standard setting of each space group, by space-group number.
std::array<int, 231> find_standard_settings() {
  std::array<int, 231> result{};
  for (int hall_number = 1; hall_number <= 530; ++hall_number) {
    const HallSetting setting = hall_setting(hall_number);
    int& chosen = result.at(static_cast<std::size_t>(setting.number));
    if (chosen == 0 || setting.choice == "2") chosen = hall_number;
  }
  return result;
}

int standard_setting(int number) {
  static const std::array<int, 231> settings = find_standard_settings();
  return settings.at(static_cast<std::size_t>(number));
}

/// The primed translations of C_ccc2, C_acc2 and C_Acc2, whose unprimed operations spglib 2.0.2
/// lists as those of Ccm2_1 with primes misplaced.
const struct {
  int uni_number;
  FractionVector antitranslation;
} corrected_types[] = {
    {282, {Fraction(0), Fraction(0), Fraction(1, 2)}},
    {283, {Fraction(1, 2), Fraction(0), Fraction(0)}},
    {284, {Fraction(0), Fraction(1, 2), Fraction(1, 2)}},
};

/// Types whose operations spglib 2.0.2 lists with two axes exchanged against their BNS symbols;
/// the exchange keeps the family group.
const struct {
  int uni_number;
  std::size_t first, second;
} exchanged_axes[] = {
    {101, 1, 2},  // P2'2'2
    {178, 0, 1},  // Pc'c2'
    {235, 0, 1},  // Pb'a2'
    {256, 0, 1},  // Pn'n2'
    {265, 0, 1},  // Cm'm2'
    {280, 0, 1},  // Cc'c2'
    {319, 0, 1},  // Fm'm2'
    {324, 0, 1},  // Fd'd2'
    {329, 0, 1},  // Im'm2'
};

void exchange_axes(std::vector<PrimedOperation>& operations, std::size_t i, std::size_t j) {
  for (auto& [operation, primed] : operations) {
    for (auto& row : operation.rotation) std::swap(row[i], row[j]);
    std::swap(operation.rotation[i], operation.rotation[j]);
    std::swap(operation.translation[i], operation.translation[j]);
  }
}

/// A space group and, primed, each of its operations after a translation.
std::vector<PrimedOperation> with_antitranslation(const std::vector<Operation>& operations,
                                                  const FractionVector& antitranslation) {
  std::vector<PrimedOperation> result;
  for (const Operation& operation : operations) result.push_back({operation, false});
  for (Operation operation : operations) {
    operation.translation = modulo_one(operation.translation + antitranslation);
    result.push_back({operation, true});
  }
  return result;
}

std::vector<PrimitiveMagneticGroup::Element> generators_of(const PrimitiveMagneticGroup& group) {
  std::vector<PrimitiveMagneticGroup::Element> candidates(group.elements().begin(),
                                                          group.elements().end());
  std::ranges::stable_sort(candidates, std::ranges::greater{},
                           [](const auto& element) { return rotation_order(element.rotation); });
  std::vector<PrimitiveMagneticGroup::Element> result;
  std::vector<IntMatrix> generated = {Operation{}.rotation};
  for (const auto& candidate : candidates) {
    if (std::ranges::find(generated, candidate.rotation) != generated.end()) continue;
    result.push_back(candidate);
    for (std::size_t i = 0; i < generated.size(); ++i) {
      for (const auto& generator : result) {
        const IntMatrix R = product(generated[i], generator.rotation);
        if (std::ranges::find(generated, R) == generated.end()) generated.push_back(R);
      }
    }
  }
  return result;
}

MagneticReference reference(int uni_number) {
  MagneticReference result{
      uni_number,
      PrimitiveMagneticGroup(standard_magnetic_operations(uni_number), RationalLattice().basis()),
      {},
      {}};
  result.generators = generators_of(result.group);
  std::vector<std::array<std::int64_t, 3>> rows;
  for (const auto& generator : result.generators)
    for (std::size_t i = 0; i < 3; ++i) {
      std::array<std::int64_t, 3> row{};
      for (std::size_t j = 0; j < 3; ++j) row[j] = (i == j ? 1 : 0) - generator.rotation[i][j];
      rows.push_back(row);
    }
  result.origin = CongruenceSystem(std::move(rows));
  return result;
}

/// Number of the leading space group of a type.
int leading_number(int uni_number) {
  const std::string_view text = magnetic_symbols(uni_number).bns_number;
  int number = 0;
  std::from_chars(text.data(), text.data() + text.size(), number);
  return number;
}

/// The last space-group number of each of the 32 crystal classes.
constexpr std::array<int, 32> last_of_class = {
    1,   2,   5,   9,   15,  24,  46,  74,  80,  82,  88,  98,  110, 122, 142, 146,
    148, 155, 161, 167, 173, 174, 176, 182, 186, 190, 194, 199, 206, 214, 220, 230};

std::size_t class_of_number(int number) {
  return static_cast<std::size_t>(std::ranges::lower_bound(last_of_class, number) -
                                  last_of_class.begin());
}

/// Kinds of rotations, sorted: different for each crystal class.
std::vector<int> census(std::span<const PrimitiveMagneticGroup::Element> elements) {
  std::vector<int> result;
  result.reserve(elements.size());
  for (const auto& element : elements)
    result.push_back(determinant(element.rotation) * rotation_order(element.rotation));
  std::ranges::sort(result);
  return result;
}

std::map<std::vector<int>, std::size_t> classes_by_census() {
  std::map<std::vector<int>, std::size_t> result;
  for (std::size_t i = 0; i < last_of_class.size(); ++i) {
    std::vector<PrimedOperation> operations;
    for (const Operation& operation : hall_operations(standard_setting(last_of_class.at(i))))
      operations.push_back({operation, false});
    result[census(PrimitiveMagneticGroup(operations, RationalLattice().basis()).elements())] = i;
  }
  return result;
}

/// The types of one crystal class and one kind (1 … 4), set up when first asked for.
struct ReferenceShelf {
  std::once_flag once;
  std::map<std::vector<int>, std::vector<MagneticReference>> by_invariants;
};

void fill(ReferenceShelf& shelf, std::size_t crystal_class, int type) {
  for (int uni_number = 1; uni_number <= type_count; ++uni_number) {
    if (magnetic_symbols(uni_number).type != type ||
        class_of_number(leading_number(uni_number)) != crystal_class)
      continue;
    MagneticReference entry = reference(uni_number);
    shelf.by_invariants[entry.group.invariants()].push_back(std::move(entry));
  }
}

}  // namespace

const MagneticSymbols& magnetic_symbols(int uni_number) {
  static const std::vector<MagneticSymbols> symbols = parse_symbols(data_magnetic_group_symbols);
  require_type_number(uni_number);
  return symbols.at(static_cast<std::size_t>(uni_number - 1));
}

std::vector<PrimedOperation> standard_magnetic_operations(int uni_number) {
  const int setting = standard_setting(leading_number(uni_number));
  for (const auto& [number, antitranslation] : corrected_types)
    if (number == uni_number)
      return with_antitranslation(hall_operations(setting), antitranslation);
  auto operations = magnetic_operations(uni_number, setting);
  for (const auto& [number, first, second] : exchanged_axes)
    if (number == uni_number) exchange_axes(operations, first, second);
  return operations;
}

std::span<const MagneticReference> magnetic_references(const PrimitiveMagneticGroup& group) {
  static const auto classes = classes_by_census();
  static std::array<ReferenceShelf, 4 * last_of_class.size()> shelves;
  const auto crystal_class = classes.find(census(group.elements()));
  if (crystal_class == classes.end()) return {};
  const std::size_t index = 4 * crystal_class->second + static_cast<std::size_t>(group.type() - 1);
  ReferenceShelf& shelf = shelves.at(index);
  std::call_once(shelf.once, [&] { fill(shelf, crystal_class->second, group.type()); });
  const auto found = shelf.by_invariants.find(group.invariants());
  if (found == shelf.by_invariants.end()) return {};
  return found->second;
}

}  // namespace spinsieve
