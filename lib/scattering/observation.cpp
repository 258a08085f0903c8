#include "scattering/observation.hpp"

#include <algorithm>
#include <cmath>
#include <optional>
#include <stdexcept>

#include "scattering/constants.hpp"
#include "scattering/geometry.hpp"
#include "scattering/intensity_form.hpp"

namespace spinsieve {
namespace {

/// One entry, or one computed absence, before merging.
struct Window {
  double low = 0;
  double high = 0;
  double observed = 0;
  double sigma = 0;
  bool is_line = false;
  bool at_least = false;
  bool at_most = false;
  std::optional<std::size_t> line;
  std::optional<std::size_t> absence;
  std::string text;
};

double positive(double value, const char* what, const LinePosition& position) {
  if (std::isfinite(value) && value > 0) return value;
  throw Error(position.place, std::string(what) + " " + std::to_string(value) + " of " +
                                  position.text + "; it must be positive");
}

void set_strength(Window& window, const ObservedLine& line) {
  window.is_line = true;
  window.at_most = line.foreign;
  if (line.intensity) {
    window.observed = *line.intensity;
    window.sigma = positive(line.sigma, "sigma", line.position);
  } else {
    window.at_least = true;
    window.observed = positive(line.above.value_or(0), "above", line.position);
    window.sigma = line.sigma > 0 ? line.sigma : window.observed / limit_per_sigma;
  }
}

void set_strength(Window& window, const Absence& absence) {
  window.sigma = positive(absence.below, "below", absence.position) / limit_per_sigma;
}

void set_range(Window& window, const LinePosition& position, const Measurement& measurement) {
  const std::optional<double> reach = largest_q(measurement.geometry);
  if (reach && position.q >= *reach)
    throw Error(position.place, position.text + " (q = " + std::to_string(position.q) +
                                    " Å⁻¹) is out of reach of the wavelength; the largest q is "
                                    "4π/λ = " +
                                    std::to_string(*reach));
  window.low = position.q_low;
  window.high = position.q_high;
  if (window.high <= window.low) {
    const double half = relative_width(measurement, position.q) / 2;
    window.low = position.q * (1 - half);
    window.high = position.q * (1 + half);
  }
  window.text = position.text;
}

std::vector<Window> listed_windows(const Measurement& measurement) {
  std::vector<Window> windows;
  for (std::size_t i = 0; i < measurement.lines.size(); ++i) {
    Window& window = windows.emplace_back();
    set_range(window, measurement.lines[i].position, measurement);
    set_strength(window, measurement.lines[i]);
    window.line = i;
  }
  for (std::size_t i = 0; i < measurement.absences.size(); ++i) {
    Window& window = windows.emplace_back();
    set_range(window, measurement.absences[i].position, measurement);
    set_strength(window, measurement.absences[i]);
    window.absence = i;
  }
  return windows;
}

bool inside(const Window& window, double q) { return window.low <= q && q <= window.high; }

/// Computed lines in scanned ranges that no entry owns; those that the instrument cannot tell from
/// the first of them share one absence.
std::vector<Window> computed_absences(const Measurement& measurement, const ReflectionTable& table,
                                      std::span<const Window> listed) {
  std::vector<Window> windows;
  double cluster_end = 0;
  for (const PowderLine& line : table.lines()) {
    std::optional<double> below;
    for (const ScannedRange& range : measurement.scanned)
      if (range.q_min <= line.q && line.q <= range.q_max)
        below = std::min(below.value_or(range.below), range.below);
    if (!below) continue;
    if (std::ranges::any_of(listed, [&](const Window& w) { return inside(w, line.q); })) continue;
    const double half = relative_width(measurement, line.q) / 2;
    if (!windows.empty() && line.q <= cluster_end) {
      windows.back().high = line.q * (1 + half);
      windows.back().sigma = std::max(windows.back().sigma, *below / limit_per_sigma);
      continue;
    }
    Window& window = windows.emplace_back();
    window.low = line.q * (1 - half);
    window.high = line.q * (1 + half);
    window.sigma = *below / limit_per_sigma;
    cluster_end = line.q * (1 + half);
  }
  return windows;
}

ObservationGroup merged(std::span<const Window> windows, bool& says_nothing) {
  ObservationGroup group;
  group.q_low = windows.front().low;
  group.kind = PointKind::absence;
  bool at_least = false;
  bool at_most = false;
  double variance = 0;
  for (const Window& window : windows) {
    group.q_high = std::max(group.q_high, window.high);
    group.observed += window.observed;
    variance += window.sigma * window.sigma;
    if (window.is_line) group.kind = PointKind::line;
    at_least = at_least || window.at_least;
    at_most = at_most || window.at_most;
    if (window.line) group.lines.push_back(*window.line);
    if (window.absence) group.absences.push_back(*window.absence);
    if (!window.line && !window.absence) ++group.scanned;
    if (window.text.empty()) continue;
    group.label += (group.label.empty() ? "" : " + ") + window.text;
  }
  group.sigma = std::sqrt(variance);
  if (at_least) group.kind = PointKind::at_least;
  if (at_most) group.kind = PointKind::at_most;
  says_nothing = at_least && at_most;
  return group;
}

/// The first lines by label, the rest by number.
std::string contents(const ReflectionTable& table, std::span<const std::size_t> lines) {
  constexpr std::size_t shown = 4;
  std::string text;
  for (std::size_t i = 0; i < lines.size() && i < shown; ++i)
    text += (i == 0 ? "" : ", ") + table.label(table.lines()[lines[i]]);
  if (lines.size() > shown) text += " and " + std::to_string(lines.size() - shown) + " more";
  return text;
}

double largest_window(const Measurement& measurement, std::span<const Window> listed) {
  double largest = 0;
  for (const Window& window : listed) largest = std::max(largest, window.high);
  for (const ScannedRange& range : measurement.scanned) {
    if (!std::isfinite(range.q_max) || range.q_max <= range.q_min || range.below <= 0)
      throw Error(range.place, "a scanned range needs q_min below q_max and a positive limit");
    largest = std::max(largest, range.q_max);
  }
  const std::optional<double> reach = largest_q(measurement.geometry);
  // Just short of 2θ = 180°, where the Lorentz factor has a pole.
  return reach ? std::min(largest, *reach * (1 - 1e-6)) : largest;
}

bool first_non_zero_negative(const std::array<int, 3>& hkl) {
  for (const int h : hkl)
    if (h != 0) return h < 0;
  return false;
}

/// The reflection at components Q as a satellite of one of the arms, Q or −Q (equal intensity)
/// whichever has k_sign ≥ 0 or a positive first index.
std::optional<Reflection> as_satellite(const Cell& cell, const SpaceGroup& group,
                                       const ReflectionTable& table, const FractionVector& Q) {
  for (std::size_t arm = 0; arm < table.arms().size(); ++arm) {
    const FractionVector& k = table.arms()[arm].k;
    const bool fundamental = table.kind(arm) == ArmKind::fundamental;
    for (const int k_sign : {1, -1}) {
      const FractionVector hkl = fundamental ? Q : Q - Fraction(k_sign) * k;
      if (!is_integer(hkl) || !group.in_reciprocal_lattice(hkl)) continue;
      Reflection reflection;
      reflection.arm = arm;
      reflection.k_sign = fundamental ? 0 : 1;
      for (std::size_t i = 0; i < 3; ++i)
        reflection.hkl[i] = static_cast<int>(k_sign * hkl[i].numerator());
      if (fundamental && first_non_zero_negative(reflection.hkl))
        for (int& h : reflection.hkl) h = -h;
      Vector3 components{};
      for (std::size_t i = 0; i < 3; ++i)
        components[i] = reflection.hkl[i] + reflection.k_sign * k[i].to_double();
      reflection.q = cell.scattering_vector(components);
      reflection.q_length = cell.q(components);
      return reflection;
    }
  }
  return std::nullopt;
}

bool same_reflection(const Reflection& a, const Reflection& b) {
  return a.arm == b.arm && a.hkl == b.hkl && a.k_sign == b.k_sign;
}

}  // namespace

ObservationPlan::ObservationPlan(const Cell& cell, const SpaceGroup& group,
                                 std::span<const Arm> arms, const Measurement& measurement) {
  if (measurement.sample == Sample::single_crystal) {
    table_ = ReflectionTable(cell, group, arms, 0, 0);
    plan_crystal(cell, group, measurement);
    return;
  }
  const double q_max = largest_window(measurement, listed_windows(measurement));
  table_ = ReflectionTable(cell, group, arms, 0, q_max);
  plan_powder(measurement);
}

void ObservationPlan::plan_powder(const Measurement& measurement) {
  std::vector<Window> windows = listed_windows(measurement);
  const std::vector<Window> computed = computed_absences(measurement, table_, windows);
  windows.insert(windows.end(), computed.begin(), computed.end());
  std::ranges::stable_sort(windows, {}, &Window::low);
  std::vector<bool> owned(table_.lines().size());
  for (std::size_t first = 0; first < windows.size();) {
    double high = windows[first].high;
    std::size_t last = first + 1;
    for (; last < windows.size() && windows[last].low < high; ++last)
      high = std::max(high, windows[last].high);
    bool says_nothing = false;
    ObservationGroup group = merged(std::span(windows).subspan(first, last - first), says_nothing);
    first = last;
    if (says_nothing) continue;
    for (std::size_t i = 0; i < table_.lines().size(); ++i) {
      const double q = table_.lines()[i].q;
      if (q < group.q_low || q > group.q_high) continue;
      group.table_lines.push_back(i);
      owned[i] = true;
    }
    group.contents = contents(table_, group.table_lines);
    if (group.label.empty()) group.label = "scanned, " + group.contents;
    groups_.push_back(std::move(group));
  }
  for (std::size_t i = 0; i < table_.lines().size(); ++i) {
    if (!owned[i]) unmeasured_.push_back(i);
    lorentz_.push_back(lorentz_factor(measurement, table_.lines()[i].q));
  }
}

void ObservationPlan::plan_crystal(const Cell& cell, const SpaceGroup& group,
                                   const Measurement& measurement) {
  const auto add = [&](const LinePosition& position) -> ObservationGroup& {
    if (!position.index)
      throw Error(position.place, position.text + " in a single-crystal list; give hkl and k_sign");
    const ReflectionIndex& index = *position.index;
    const auto arm = std::ranges::find(table_.arms(), index.wavevector, &Arm::wavevector);
    if (arm == table_.arms().end())
      throw std::logic_error("no arm for the wavevector of " + position.text);
    const FractionVector hkl = {index.hkl[0], index.hkl[1], index.hkl[2]};
    const FractionVector Q = hkl + Fraction(index.k_sign) * arm->k;
    if (!group.in_reciprocal_lattice(hkl) || Q == FractionVector{})
      throw Error(position.place, position.text +
                                      " is no reflection of this lattice and wavevector; hkl must "
                                      "be a reciprocal-lattice vector, centring respected");
    ObservationGroup& result = groups_.emplace_back();
    const double share = 1.0 / static_cast<double>(group.order());
    for (const Operation& operation : group.operations()) {
      const auto image = as_satellite(cell, group, table_, row_times(Q, operation.rotation));
      if (!image) continue;
      const auto known = std::ranges::find_if(
          result.domain_reflections,
          [&](const DomainReflection& d) { return same_reflection(d.reflection, *image); });
      if (known != result.domain_reflections.end()) {
        known->share += share;
      } else {
        result.domain_reflections.push_back({*image, share});
      }
    }
    const double q = cell.q(to_double(Q));
    const std::optional<double> reach = largest_q(measurement.geometry);
    if (reach && q >= *reach)
      throw Error(position.place, position.text + " is out of reach of the wavelength");
    group_lorentz_.push_back(lorentz_factor(measurement, q));
    result.q_low = q;
    result.q_high = q;
    result.label = position.text;
    if (!result.domain_reflections.empty())
      result.contents = table_.label(result.domain_reflections.front().reflection);
    return result;
  };
  const auto fill = [](ObservationGroup& result, const Window& window) {
    result.observed = window.observed;
    result.sigma = window.sigma;
    result.kind = !window.is_line   ? PointKind::absence
                  : window.at_least ? PointKind::at_least
                  : window.at_most  ? PointKind::at_most
                                    : PointKind::line;
  };
  for (std::size_t i = 0; i < measurement.lines.size(); ++i) {
    const ObservedLine& line = measurement.lines[i];
    Window window;
    set_strength(window, line);
    if (window.at_least && window.at_most) continue;
    ObservationGroup& result = add(line.position);
    fill(result, window);
    result.lines.push_back(i);
  }
  for (std::size_t i = 0; i < measurement.absences.size(); ++i) {
    Window window;
    set_strength(window, measurement.absences[i]);
    ObservationGroup& result = add(measurement.absences[i].position);
    fill(result, window);
    result.absences.push_back(i);
  }
}

std::vector<DataPoint> data_points(const ObservationPlan& plan,
                                   const MagneticScatterers& scatterers, const MomentField& field) {
  const auto n = static_cast<Eigen::Index>(field.parameters);
  std::vector<DataPoint> points;
  std::vector<std::size_t> lines;
  std::vector<std::size_t> line_point;
  std::vector<Reflection> reflections;
  std::vector<std::size_t> reflection_point;
  std::vector<double> reflection_weight;
  std::vector<std::optional<std::size_t>> field_arm(plan.table().arms().size());
  for (std::size_t i = 0; i < field.arms.size(); ++i) {
    const auto arm = std::ranges::find(plan.table().arms(), field.arms[i].k, &Arm::k);
    if (arm == plan.table().arms().end())
      throw std::logic_error("the plan lacks the arm " + to_string(field.arms[i].k));
    field_arm[static_cast<std::size_t>(arm - plan.table().arms().begin())] = i;
  }
  for (std::size_t g = 0; g < plan.groups().size(); ++g) {
    const ObservationGroup& group = plan.groups()[g];
    points.push_back({Eigen::MatrixXd::Zero(n, n), group.observed, group.sigma, group.kind, g});
    for (const std::size_t line : group.table_lines) {
      lines.push_back(line);
      line_point.push_back(g);
    }
    for (const DomainReflection& domain : group.domain_reflections) {
      const std::optional<std::size_t> arm = field_arm[domain.reflection.arm];
      if (!arm) continue;
      reflections.push_back(domain.reflection);
      reflections.back().arm = *arm;
      reflection_point.push_back(g);
      reflection_weight.push_back(domain.share * plan.group_lorentz(g));
    }
  }
  const std::vector<IntensityForm> forms = line_forms(scatterers, field, plan.table(), lines);
  for (std::size_t i = 0; i < lines.size(); ++i)
    points[line_point[i]].form += barn_per_mu_b2 * plan.lorentz(lines[i]) * forms[i].mu_b2();
  const std::vector<IntensityForm> single = reflection_forms(scatterers, field, reflections);
  for (std::size_t i = 0; i < reflections.size(); ++i)
    points[reflection_point[i]].form += barn_per_mu_b2 * reflection_weight[i] * single[i].mu_b2();
  return points;
}

}  // namespace spinsieve
