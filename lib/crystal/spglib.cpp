#include "crystal/spglib.hpp"

#include <cmath>
#include <memory>
#include <mutex>
#include <span>
#include <stdexcept>

#include <spglib.h>

#include "exact/error.hpp"

// NOLINTBEGIN(modernize-avoid-c-arrays): spglib's interface is C.

namespace spinsieve {

namespace {

constexpr int hall_numbers = 530;
constexpr int uni_numbers = 1651;

/// spglib keeps its error state in one static, so one call runs at a time.
std::mutex& door() {
  static std::mutex mutex;
  return mutex;
}

/// Translations of the database are multiples of 1/24 up to rounding.
Fraction exact_translation(double value) {
  static const std::array<Fraction, 24> multiples = [] {
    std::array<Fraction, 24> result;
    for (int n = 0; n < 24; ++n) result[static_cast<std::size_t>(n)] = Fraction(n, 24);
    return result;
  }();
  const double scaled = value * 24;
  const double rounded = std::floor(scaled + 0.5);
  if (!(std::abs(scaled - rounded) < 1e-4))
    throw std::logic_error("a tabulated translation is no multiple of 1/24; please report");
  const int n = static_cast<int>(rounded);
  if (n >= 0 && n < 24) return multiples[static_cast<std::size_t>(n)];
  return {n, 24};
}

Operation exact_operation(const int (&rotation)[3][3], const double (&translation)[3]) {
  Operation operation;
  for (std::size_t i = 0; i < 3; ++i) {
    for (std::size_t j = 0; j < 3; ++j) operation.rotation[i][j] = rotation[i][j];
    operation.translation[i] = exact_translation(translation[i]);
  }
  return operation;
}

std::string trimmed(std::string_view text) {
  while (!text.empty() && text.back() == ' ') text.remove_suffix(1);
  while (!text.empty() && text.front() == ' ') text.remove_prefix(1);
  return std::string(text);
}

void require_hall_number(int hall_number) {
  if (hall_number < 1 || hall_number > hall_numbers)
    throw Error("hall number " + std::to_string(hall_number) + "; it must lie within 1 to 530");
}

void require_uni_number(int uni_number) {
  if (uni_number < 1 || uni_number > uni_numbers)
    throw Error("UNI number " + std::to_string(uni_number) + "; it must lie within 1 to 1651");
}

/// "P 1 2_1/n 1" to "P 2_1/n".
std::string without_ones(const std::string& full) {
  std::string text;
  for (std::size_t i = 0; i < full.size(); ++i) {
    const bool one = full[i] == ' ' && i + 1 < full.size() && full[i + 1] == '1' &&
                     (i + 2 == full.size() || full[i + 2] == ' ');
    if (one)
      ++i;
    else
      text += full[i];
  }
  return text;
}

/// The symbol of the setting from "P 2_1/c = P 1 1 2_1/b = P 2_1/b": the group type, the full
/// symbol and, in some settings, a short one.
std::string short_symbol(std::string_view listed, const std::string& full,
                         const std::string& choice) {
  std::vector<std::string> parts;
  while (true) {
    const std::size_t end = listed.find('=');
    parts.push_back(trimmed(listed.substr(0, end)));
    if (end == std::string_view::npos) break;
    listed.remove_prefix(end + 1);
  }
  if (parts.size() == 1) return parts[0];
  if (parts.size() == 3) return parts[2];
  return choice.find('b') != std::string::npos ? without_ones(full) : full;
}

}  // namespace

HallSetting hall_setting(int hall_number) {
  require_hall_number(hall_number);
  const SpglibSpacegroupType type = [hall_number] {
    const std::scoped_lock lock(door());
    return spg_get_spacegroup_type(hall_number);
  }();
  if (type.number < 1)
    throw std::logic_error("no entry for hall number " + std::to_string(hall_number));
  HallSetting setting;
  setting.hall_number = hall_number;
  setting.number = type.number;
  setting.symbol_full = trimmed(type.international_full);
  setting.hall_symbol = trimmed(type.hall_symbol);
  setting.choice = trimmed(type.choice);
  setting.symbol_short = short_symbol(type.international, setting.symbol_full, setting.choice);
  // The table names this one setting of No. 68 without its e glide.
  if (hall_number == 331) setting.symbol_short = "B b e b";
  return setting;
}

std::vector<Operation> hall_operations(int hall_number) {
  require_hall_number(hall_number);
  int rotations[192][3][3];
  double translations[192][3];
  int count = 0;
  {
    const std::scoped_lock lock(door());
    count = spg_get_symmetry_from_database(rotations, translations, hall_number);
  }
  if (count < 1)
    throw std::logic_error("no operations for hall number " + std::to_string(hall_number));
  std::vector<Operation> operations;
  operations.reserve(static_cast<std::size_t>(count));
  for (int i = 0; i < count; ++i)
    operations.push_back(exact_operation(rotations[i], translations[i]));
  return operations;
}

namespace {

struct MadeUpCrystal {
  double lattice[3][3];  ///< Columns a, b, c in Å; right-handed.
  std::vector<std::array<double, 3>> atoms;
  std::vector<int> types;
};

/// Lower triangle rows of Cholesky's factor are the axes, some ten Å long.
void set_lattice(MadeUpCrystal& crystal, const IntMetric& G, double volume) {
  double L[3][3] = {};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j <= i; ++j) {
      auto sum = static_cast<double>(G[i][j]);
      for (std::size_t k = 0; k < j; ++k) sum -= L[i][k] * L[j][k];
      L[i][j] = i == j ? std::sqrt(sum) : sum / L[j][j];
    }
  const double scale = std::cbrt(volume / (L[0][0] * L[1][1] * L[2][2]));
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) crystal.lattice[j][i] = scale * L[i][j];
}

double draw(std::uint64_t& state) {
  state = state * 6364136223846793005U + 1442695040888963407U;
  return static_cast<double>(state >> 33U) / static_cast<double>(std::uint64_t{1} << 31U);
}

void add_orbit(MadeUpCrystal& crystal, std::span<const Operation> operations, int type,
               std::uint64_t& state) {
  const std::array<double, 3> start{draw(state), draw(state), draw(state)};
  for (const Operation& operation : operations) {
    std::array<double, 3> image{};
    for (std::size_t i = 0; i < 3; ++i) {
      image[i] = operation.translation[i].to_double();
      for (std::size_t j = 0; j < 3; ++j) image[i] += operation.rotation[i][j] * start[j];
      image[i] -= std::floor(image[i]);
    }
    crystal.atoms.push_back(image);
    crystal.types.push_back(type);
  }
}

/// The data set, in the axes of the first setting of its type, which are those of the standard
/// setting; null on failure.
std::unique_ptr<SpglibDataset, void (*)(SpglibDataset*)> dataset(MadeUpCrystal& crystal) {
  constexpr double tolerance = 1e-5;  // Å, with axes of some ten Å and exact input.
  std::vector<double> positions;
  for (const std::array<double, 3>& atom : crystal.atoms)
    positions.insert(positions.end(), atom.begin(), atom.end());
  const std::scoped_lock lock(door());
  return {spg_get_dataset(
              crystal.lattice,
              reinterpret_cast<double(*)[3]>(positions.data()),  // NOLINT: three numbers an atom.
              crystal.types.data(), static_cast<int>(crystal.types.size()), tolerance),
          spg_free_dataset};
}

}  // namespace

std::optional<FoundSymmetry> search_symmetry(std::span<const Operation> operations,
                                             const IntMetric& G, std::uint64_t seed) {
  MadeUpCrystal crystal{};
  std::uint64_t state = seed;
  add_orbit(crystal, operations, 1, state);
  add_orbit(crystal, operations, 2, state);
  set_lattice(crystal, G, 100.0 * static_cast<double>(crystal.atoms.size()));
  const auto found = dataset(crystal);
  if (!found || found->n_operations != static_cast<int>(operations.size())) return std::nullopt;
  FoundSymmetry result;
  result.number = found->spacegroup_number;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      result.transformation[i][j] = found->transformation_matrix[i][j];
  return result;
}

MagneticType magnetic_type(int uni_number) {
  require_uni_number(uni_number);
  const SpglibMagneticSpacegroupType type = [uni_number] {
    const std::scoped_lock lock(door());
    return spg_get_magnetic_spacegroup_type(uni_number);
  }();
  if (type.number < 1)
    throw std::logic_error("no entry for UNI number " + std::to_string(uni_number));
  MagneticType result;
  result.uni_number = uni_number;
  result.bns_number = trimmed(type.bns_number);
  result.og_number = trimmed(type.og_number);
  result.number = type.number;
  result.type = type.type;
  return result;
}

std::vector<PrimedOperation> magnetic_operations(int uni_number, int hall_number) {
  require_uni_number(uni_number);
  if (hall_number != 0) require_hall_number(hall_number);
  int rotations[384][3][3];
  double translations[384][3];
  int time_reversals[384];
  int count = 0;
  {
    const std::scoped_lock lock(door());
    count = spg_get_magnetic_symmetry_from_database(rotations, translations, time_reversals,
                                                    uni_number, hall_number);
  }
  if (count < 1)
    throw Error("UNI number " + std::to_string(uni_number) + " has no operations in the setting " +
                std::to_string(hall_number) +
                "; the hall number must belong to its space-group family, or be 0");
  std::vector<PrimedOperation> operations;
  operations.reserve(static_cast<std::size_t>(count));
  for (int i = 0; i < count; ++i)
    operations.push_back({exact_operation(rotations[i], translations[i]), time_reversals[i] != 0});
  return operations;
}

}  // namespace spinsieve

// NOLINTEND(modernize-avoid-c-arrays)
