#include "input/line_position.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>
#include <numbers>

#include "scattering/geometry.hpp"

namespace spinsieve {

namespace {

constexpr double pi = std::numbers::pi;
constexpr double radians = pi / 180;
constexpr std::array<std::string_view, 4> position_keys{"q", "d", "two_theta", "hkl"};
constexpr std::array<std::string_view, 3> unit_keys{"q", "d", "two_theta"};
constexpr std::array<std::string_view, 3> unit_names{"Å⁻¹", "Å", "degrees"};

std::size_t index(PositionUnit unit) { return static_cast<std::size_t>(unit); }

/// 0 when none is given.
double wavelength_of(const Measurement& measurement) {
  const auto* constant = std::get_if<ConstantWavelength>(&measurement.geometry);
  return constant == nullptr ? 0 : constant->wavelength_angstrom;
}

/// The unit of the one position given; none for hkl.
std::optional<PositionUnit> unit_of(const Fields& fields, const MeasurementContext& context) {
  fields.at_most_one(position_keys);
  for (const PositionUnit unit : {PositionUnit::q, PositionUnit::d, PositionUnit::two_theta}) {
    const std::string_view key = unit_keys[index(unit)];
    if (!fields.has(key)) continue;
    if (unit == PositionUnit::two_theta && wavelength_of(*context.measurement) == 0)
      throw Error(
          fields.key_place(key),
          "two_theta needs the key 'wavelength' of the measurement; accepted without it are "
          "q and d");
    return unit;
  }
  if (!fields.has("hkl"))
    throw Error(fields.place(), fields.what() + " needs a position: " + joined_or(position_keys));
  return std::nullopt;
}

Limits limits_of(PositionUnit unit) {
  if (unit == PositionUnit::two_theta) return {.above = 0, .below = 180, .unit = "degrees"};
  if (unit == PositionUnit::d) return {.above = 0, .at_most = 1e5, .unit = "Å"};
  return {.above = 0, .at_most = 1e3, .unit = "Å⁻¹"};
}

void require_reach(double q, const Place& place, const MeasurementContext& context) {
  const double wavelength = wavelength_of(*context.measurement);
  if (wavelength == 0 || q <= 4 * pi / wavelength * (1 + 1e-9)) return;
  throw Error(place, "Q = " + short_text(std::round(q * 1e4) / 1e4) +
                         " Å⁻¹ is not reached with the wavelength " + short_text(wavelength) +
                         " Å; accepted is Q up to 4π/λ = " +
                         short_text(std::floor(4e4 * pi / wavelength) / 1e4) + " Å⁻¹");
}

std::array<int, 3> indices_of(const Node& node) {
  std::array<int, 3> hkl{};
  if (node.kind == NodeKind::list) {
    const std::span<const Node> items = list_of(node, "hkl", 3);
    for (std::size_t i = 0; i < 3; ++i) hkl[i] = integer_of(items[i], "hkl", -10000, 10000);
    return hkl;
  }
  // A cell of a table: "1 0 -1".
  std::string_view rest = trimmed(text_of(node, "hkl"));
  std::size_t count = 0;
  while (!rest.empty()) {
    const std::size_t end = std::min(rest.find_first_of(" \t"), rest.size());
    Node item;
    item.place = node.place;
    item.text = rest.substr(0, end);
    if (count < 3) hkl[count] = integer_of(item, "hkl", -10000, 10000);
    ++count;
    rest = trimmed(rest.substr(end));
  }
  if (count != 3)
    throw Error(node.place,
                "hkl " + in_quotes(node.text) + " must be three integers such as '1 0 -1'");
  return hkl;
}

ReflectionIndex reflection_of(const Fields& fields, const Job& job, ListKind kind) {
  ReflectionIndex result;
  result.hkl = indices_of(*fields.find("hkl"));
  if (const Node* sign = fields.find("k_sign")) result.k_sign = integer_of(*sign, "k_sign", -1, 1);
  if (kind == ListKind::nuclear) return result;
  const bool magnetic_only_at_k =
      std::ranges::any_of(job.propagation, [](const Wavevector& k) { return k != Wavevector(); });
  if (!fields.has("k_sign") && (magnetic_only_at_k || job.locate_propagation))
    throw Error(fields.key_place("hkl"),
                "hkl needs the key 'k_sign' (-1, 0 or 1) beside it when k is not zero");
  if (const Node* k = fields.find("k"))
    result.wavevector = static_cast<std::size_t>(
        integer_of(*k, "k", 1, std::max(1, static_cast<int>(job.propagation.size()))) - 1);
  else if (result.k_sign != 0 && job.propagation.size() > 1)
    throw Error(
        fields.key_place("hkl"),
        "hkl needs the key 'k', the number of its propagation vector, when there are several");
  return result;
}

double q_of_reflection(const Fields& fields, const ReflectionIndex& index, const Job& job) {
  Vector3 indices{};
  for (std::size_t i = 0; i < 3; ++i) indices[i] = index.hkl[i];
  if (index.k_sign != 0) {
    if (job.propagation.empty())
      throw Error(fields.key_place("hkl"),
                  "hkl with a k_sign needs a propagation vector; accepted without one are q, d and "
                  "two_theta");
    const Wavevector& k = job.propagation[index.wavevector];
    if (k.is_symbolic())
      throw Error(fields.key_place("hkl"),
                  "hkl with a k_sign needs a propagation vector without free parameters, not (" +
                      to_string(k) + ")");
    for (std::size_t i = 0; i < 3; ++i) indices[i] += index.k_sign * k.constant[i].to_double();
  }
  const double q = job.cell.q(indices);
  if (!(q > 1e-9))
    throw Error(fields.key_place("hkl"), "this reflection has Q = 0, the direct beam");
  return q;
}

std::string text_of_reflection(const ReflectionIndex& index, const Job& job) {
  std::string text = "hkl";
  for (const int n : index.hkl) text += " " + std::to_string(n);
  if (index.k_sign == 0) return text;
  text += index.k_sign > 0 ? " + k" : " - k";
  if (job.propagation.size() > 1) text += std::to_string(index.wavevector + 1);
  return text;
}

std::string text_of_position(PositionUnit unit, const std::string& written) {
  const std::string value(trimmed(written));
  if (unit == PositionUnit::two_theta) return "2θ " + value + "°";
  return std::string(unit_keys[index(unit)]) + " " + value;
}

void own_window(const Fields& fields, PositionUnit unit, double value,
                const MeasurementContext& context, LinePosition& position) {
  const Node& node = *fields.find("width");
  const double width = number_of(node, "width", {.above = 0, .unit = unit_names[index(unit)]});
  const double low = value - width / 2;
  double high = value + width / 2;
  if (!(low > 0))
    throw Error(node.place, "width " + in_quotes(node.text) +
                                " reaches below zero at this position; "
                                "accepted is a full width below " +
                                short_text(2 * value) + " " + std::string(unit_names[index(unit)]));
  if (unit == PositionUnit::two_theta) high = std::min(high, 180.0);
  const double wavelength = wavelength_of(*context.measurement);
  position.q_low = q_of(unit, low, wavelength);
  position.q_high = q_of(unit, high, wavelength);
  if (position.q_low > position.q_high) std::swap(position.q_low, position.q_high);
}

}  // namespace

double q_of(PositionUnit unit, double value, double wavelength_angstrom) {
  switch (unit) {
    case PositionUnit::q:
      return value;
    case PositionUnit::d:
      return 2 * pi / value;
    case PositionUnit::two_theta:
      return 4 * pi * std::sin(value / 2 * radians) / wavelength_angstrom;
  }
  return value;
}

LinePosition read_position(const Fields& fields, const MeasurementContext& context, ListKind kind) {
  const Measurement& measurement = *context.measurement;
  LinePosition position;
  position.place = fields.place();
  const std::optional<PositionUnit> unit = unit_of(fields, context);
  double value = 0;
  if (unit) {
    const Node& node = *fields.find(unit_keys[index(*unit)]);
    if (measurement.sample == Sample::single_crystal)
      throw Error(fields.key_place(unit_keys[index(*unit)]),
                  "a line of a single crystal is given by hkl and k_sign, not by its " +
                      std::string(unit_keys[index(*unit)]));
    for (const std::string_view key : {"k_sign", "k"})
      if (fields.has(key))
        throw Error(fields.key_place(key), in_quotes(key) + " is accepted only beside hkl");
    value = number_of(node, unit_keys[index(*unit)], limits_of(*unit));
    position.q = q_of(*unit, value, wavelength_of(measurement));
    position.text = text_of_position(*unit, node.text);
    require_reach(position.q, node.place, context);
  } else {
    position.index = reflection_of(fields, *context.job, kind);
    position.q = q_of_reflection(fields, *position.index, *context.job);
    position.text = text_of_reflection(*position.index, *context.job);
    require_reach(position.q, fields.find("hkl")->place, context);
  }
  if (fields.has("width")) {
    if (!unit)
      throw Error(fields.key_place("width"), "width is accepted only beside q, d or two_theta");
    own_window(fields, *unit, value, context, position);
    return position;
  }
  double width = 0;
  try {
    width = relative_width(measurement, position.q);
  } catch (const Error& fault) {
    throw Error(context.resolution_place, fault.message());
  }
  position.q_low = position.q * std::max(0.0, 1 - width / 2);
  position.q_high = position.q * (1 + width / 2);
  return position;
}

std::optional<double> read_tolerance(const Fields& fields, const MeasurementContext& context) {
  const Node* node = fields.find("tolerance");
  if (node == nullptr) return std::nullopt;
  const std::optional<PositionUnit> unit = unit_of(fields, context);
  if (!unit)
    throw Error(fields.key_place("tolerance"),
                "tolerance is accepted only beside q, d or two_theta");
  const std::string_view name = unit_names[index(*unit)];
  const double value = number_of(*fields.find(unit_keys[index(*unit)]), name);
  const double tolerance =
      number_of(*node, "tolerance", {.above = 0, .at_most = value / 2, .unit = name});
  const double wavelength = wavelength_of(*context.measurement);
  switch (*unit) {
    case PositionUnit::q:
      return tolerance;
    case PositionUnit::d:
      return 2 * pi / (value * value) * tolerance;
    case PositionUnit::two_theta:
      return 2 * pi * std::cos(value / 2 * radians) / wavelength * tolerance * radians;
  }
  return std::nullopt;
}

std::array<double, 2> read_range(const Fields& fields, const MeasurementContext& context) {
  const std::optional<PositionUnit> unit = unit_of(fields, context);
  if (!unit)
    throw Error(fields.key_place("hkl"), "a range is given in q, d or two_theta, not in hkl");
  const std::string_view key = unit_keys[index(*unit)];
  const Node& node = *fields.find(key);
  const std::span<const Node> items = list_of(node, key, 2);
  std::array<double, 2> q{};
  for (std::size_t i = 0; i < 2; ++i) {
    Limits limits = limits_of(*unit);
    if (*unit != PositionUnit::d) {  // A range may start at zero.
      limits.above = -std::numeric_limits<double>::infinity();
      limits.at_least = 0;
    }
    const double value = number_of(items[i], key, limits);
    q[i] = q_of(*unit, value, wavelength_of(*context.measurement));
    require_reach(q[i], items[i].place, context);
  }
  const bool rising = *unit == PositionUnit::d ? q[0] > q[1] : q[0] < q[1];
  if (!rising)
    throw Error(node.place, "range [" + items[0].text + ", " + items[1].text +
                                "] does not rise; accepted is the smaller end first");
  std::ranges::sort(q);
  return q;
}

}  // namespace spinsieve
