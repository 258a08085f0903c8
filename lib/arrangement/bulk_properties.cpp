#include "arrangement/bulk_properties.hpp"

#include <algorithm>
#include <array>

namespace spinsieve {
namespace {

using SurdRow = std::vector<Surd>;

/// Linear equations in reduced echelon form, taken up one by one.
class Equations {
 public:
  explicit Equations(std::size_t unknowns) : by_pivot_(unknowns) {}

  /// The pivot is the last non-zero entry, so that the first unknowns stay free.
  void add(SurdRow row) {
    for (std::size_t j = row.size(); j-- > 0;)
      if (!row[j].is_zero() && !by_pivot_[j].empty()) subtract(row, row[j], by_pivot_[j]);
    std::size_t pivot = row.size();
    while (pivot > 0 && row[pivot - 1].is_zero()) --pivot;
    if (pivot-- == 0) return;
    const Surd scale = row[pivot].inverse();
    for (Surd& x : row)
      if (!x.is_zero()) x = scale * x;
    for (SurdRow& other : by_pivot_)
      if (!other.empty() && !other[pivot].is_zero()) subtract(other, other[pivot], row);
    by_pivot_[pivot] = std::move(row);
  }

  bool is_free(std::size_t unknown) const { return by_pivot_[unknown].empty(); }
  /// How unknown i follows from free unknown j.
  Surd coefficient(std::size_t i, std::size_t j) const {
    if (is_free(i)) return {Fraction(i == j ? 1 : 0)};
    return -by_pivot_[i][j];
  }
  std::size_t unknowns() const noexcept { return by_pivot_.size(); }

 private:
  static void subtract(SurdRow& target, const Surd factor, const SurdRow& source) {
    for (std::size_t j = 0; j < target.size(); ++j)
      if (!source[j].is_zero()) target[j] = target[j] - factor * source[j];
  }

  std::vector<SurdRow> by_pivot_;
};

/// "xx-1/2yy" from the free components that a component follows.
std::string combination(const Equations& equations, std::size_t component,
                        std::span<const std::string> names) {
  std::string result;
  for (std::size_t j = 0; j < equations.unknowns(); ++j) {
    if (!equations.is_free(j)) continue;
    const Surd factor = equations.coefficient(component, j);
    if (factor.is_zero()) continue;
    std::string text = to_string(factor);
    if (!factor.rational().is_zero() && !factor.root().is_zero())
      text.insert(0, 1, '(').append(1, ')');
    if (text == "1") text.clear();
    if (text == "-1") text = "-";
    if (!result.empty() && !text.starts_with('-')) result += '+';
    result += text + names[j];
  }
  return result.empty() ? "0" : result;
}

/// The form of a quantity whose component i goes to Σ_j image(g, i, j) · component j.
template <typename Image>
TensorForm invariant_form(std::span<const PrimedRotation> generators, std::size_t rows,
                          std::span<const std::string> names, Image&& image) {
  const std::size_t count = names.size();
  Equations equations(count);
  for (std::size_t g = 0; g < generators.size(); ++g) {
    for (std::size_t i = 0; i < count; ++i) {
      SurdRow row(count);
      for (std::size_t j = 0; j < count; ++j) row[j] = image(g, i, j);
      row[i] = row[i] - Surd(Fraction(1));
      equations.add(std::move(row));
    }
  }
  TensorForm result{rows, count / rows, 0, {}};
  for (std::size_t i = 0; i < count; ++i) {
    if (equations.is_free(i)) ++result.independent;
    result.entries.push_back(combination(equations, i, names));
  }
  return result;
}

enum class Parity { polar, axial };

TensorForm vector_form(std::span<const PrimedRotation> generators, Parity parity,
                       std::span<const std::string> names) {
  return invariant_form(generators, 1, names, [&](std::size_t g, std::size_t i, std::size_t j) {
    const auto& [R, primed] = generators[g];
    int sign = 1;
    if (parity == Parity::axial) sign = determinant(R) * (primed ? -1 : 1);
    return Surd(Fraction(std::int64_t{sign} * R[i][j]));
  });
}

constexpr std::array<std::array<std::size_t, 2>, 6> pairs = {
    {{0, 0}, {1, 1}, {2, 2}, {1, 2}, {0, 2}, {0, 1}}};

std::vector<std::string> magnetoelectric_names() {
  const std::string axes = "xyz";
  std::vector<std::string> names;
  for (const char i : axes)
    for (const char j : axes) names.push_back({i, j});
  return names;
}

std::vector<std::string> piezomagnetic_names() {
  const std::string axes = "xyz";
  std::vector<std::string> names;
  for (const char i : axes)
    for (const auto& [j, k] : pairs) names.push_back({i, axes[j], axes[k]});
  return names;
}

}  // namespace

std::string to_string(const TensorForm& form) {
  const bool vector = form.rows == 1;
  std::string result = vector ? "(" : "[";
  for (std::size_t i = 0; i < form.entries.size(); ++i) {
    if (i > 0) result += i % form.columns == 0 ? "; " : vector ? "," : " ";
    result += form.entries[i];
  }
  return result + (vector ? ")" : "]");
}

TensorForm moment_form(std::span<const PrimedRotation> operations) {
  static const std::vector<std::string> names = {"mx", "my", "mz"};
  return vector_form(operations, Parity::axial, names);
}

BulkProperties bulk_properties(const MagneticPointGroup& group,
                               std::span<const IntMatrix> parent_rotations) {
  static const std::vector<std::string> dipole = {"px", "py", "pz"};
  static const std::vector<std::string> electric = magnetoelectric_names();
  static const std::vector<std::string> stress = piezomagnetic_names();

  const std::vector<PrimedRotation> generators = group.generators();
  std::vector<PrimedRotation> parent;
  for (const IntMatrix& R : parent_rotations) parent.push_back({R, false});

  BulkProperties result;
  result.magnetic_point_group = group.symbol();
  result.net_moment = moment_form(generators);
  result.polarisation = vector_form(generators, Parity::polar, dipole);
  result.polarisation_newly_allowed =
      result.polarisation.independent > vector_form(parent, Parity::polar, dipole).independent;

  const CrystalFrame frame(parent_rotations);
  result.frame = frame.text();
  std::vector<SurdMatrix> R;
  std::vector<Surd> sign;  // of an axial quantity that is odd in time
  for (const auto& [rotation, primed] : generators) {
    R.push_back(frame.cartesian(rotation));
    sign.emplace_back(Fraction(std::int64_t{determinant(rotation)} * (primed ? -1 : 1)));
  }
  result.linear_magnetoelectric =
      invariant_form(generators, 3, electric, [&](std::size_t g, std::size_t i, std::size_t j) {
        return sign[g] * R[g][i / 3][j / 3] * R[g][i % 3][j % 3];
      });
  result.piezomagnetic =
      invariant_form(generators, 3, stress, [&](std::size_t g, std::size_t i, std::size_t j) {
        const Surd& outer = R[g][i / 6][j / 6];
        if (outer.is_zero()) return Surd();
        const auto& [a, b] = pairs[i % 6];
        const auto& [c, d] = pairs[j % 6];
        Surd inner = R[g][a][c] * R[g][b][d];
        if (c != d) inner = inner + R[g][a][d] * R[g][b][c];
        return sign[g] * outer * inner;
      });
  return result;
}

}  // namespace spinsieve
