#include "crystal/spglib.hpp"

#include <cmath>
#include <memory>
#include <mutex>
#include <stdexcept>

#include <spglib.h>

#include "exact/error.hpp"

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
