#include "report/magnetic_cif.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <numbers>
#include <numeric>
#include <stdexcept>

#include "arrangement/bulk_properties.hpp"
#include "crystal/fraction_matrix.hpp"
#include "report/cif_text.hpp"

namespace spinsieve {
namespace {

/// Moments of equivalent atoms must agree to this, in µB: they come from one exact field.
constexpr double moment_tolerance = 1e-6;

/// The cell of basis vectors (a, b, c) P.
Cell cell_of(const Cell& parent, const FractionMatrix& P) {
  Matrix3 metric{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      for (std::size_t k = 0; k < 3; ++k)
        for (std::size_t l = 0; l < 3; ++l)
          metric[i][j] += P[k][i].to_double() * parent.metric()[k][l] * P[l][j].to_double();
  const auto angle = [&](std::size_t i, std::size_t j) {
    return std::acos(metric[i][j] / std::sqrt(metric[i][i] * metric[j][j])) * 180 /
           std::numbers::pi;
  };
  return {std::sqrt(metric[0][0]),
          std::sqrt(metric[1][1]),
          std::sqrt(metric[2][2]),
          angle(1, 2),
          angle(0, 2),
          angle(0, 1)};
}

Vector3 times(const FractionMatrix& A, const Vector3& v) {
  Vector3 result{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) result[i] += A[i][j].to_double() * v[j];
  return result;
}

/// A magnetic group in the cell in which it is written.
struct WrittenGroup {
  BasisTransformation cell;                      ///< From the parent.
  std::vector<PrimedOperation> representatives;  ///< Modulo the centrings.
  std::vector<PrimedOperation> centrings;        ///< Pure translations, primed ones included.
};

FractionVector plus(const FractionVector& a, const FractionVector& b) { return modulo_one(a + b); }

WrittenGroup written_group(const MagneticGroup& group) {
  WrittenGroup result{magnetic_cell(group), {}, {}};
  const bool halves = group.type() == 2 || group.type() == 4;
  std::vector<PrimedOperation> translations;
  for (const auto& [operation, primed] : group.operations()) {
    PrimedOperation there{transformed(operation, result.cell), primed};
    there.operation.translation = modulo_one(there.operation.translation);
    if (!(halves && primed)) result.representatives.push_back(there);
    if (primed && there.operation.rotation == Operation{}.rotation) translations.push_back(there);
  }
  for (const FractionVector& v : group.lattice().basis())
    translations.push_back({transformed({Operation{}.rotation, v}, result.cell), false});
  result.centrings.push_back({});
  for (std::size_t i = 0; i < result.centrings.size(); ++i) {
    for (const auto& [operation, primed] : translations) {
      PrimedOperation next = result.centrings[i];
      next.operation.translation = plus(next.operation.translation, operation.translation);
      next.primed = next.primed != primed;
      const bool known = std::ranges::any_of(result.centrings, [&](const PrimedOperation& c) {
        return c.primed == next.primed && c.operation == next.operation;
      });
      if (!known) result.centrings.push_back(next);
    }
  }
  std::ranges::stable_sort(result.centrings, {}, &PrimedOperation::primed);
  return result;
}

std::string magnetic_text(const PrimedOperation& operation) {
  return "'" + to_string(operation.operation) + (operation.primed ? ",-1'" : ",+1'");
}

std::string operation_loop(const std::string& category,
                           const std::vector<PrimedOperation>& operations) {
  std::vector<std::vector<std::string>> rows;
  rows.reserve(operations.size());
  for (const auto& operation : operations)
    rows.push_back({std::to_string(rows.size() + 1), magnetic_text(operation)});
  return cif_loop({category + ".id", category + ".xyz"}, rows);
}

std::vector<PrimedOperation> all_operations(const WrittenGroup& group) {
  std::vector<PrimedOperation> result;
  for (const auto& centring : group.centrings) {
    for (auto operation : group.representatives) {
      operation.operation.translation =
          plus(operation.operation.translation, centring.operation.translation);
      operation.primed = operation.primed != centring.primed;
      result.push_back(operation);
    }
  }
  return result;
}

bool is_zero(const Vector3& m) {
  return std::ranges::all_of(m, [](double x) { return std::abs(x) < moment_tolerance; });
}

/// Lattice-basis components of the moment after a primed or unprimed rotation.
Vector3 image(const PrimedOperation& operation, const Vector3& moment) {
  const IntMatrix& R = operation.operation.rotation;
  const double sign = determinant(R) * (operation.primed ? -1 : 1);
  Vector3 result{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) result[i] += sign * R[i][j] * moment[j];
  return result;
}

}  // namespace

BasisTransformation magnetic_cell(const MagneticGroup& group) {
  BasisTransformation result;
  for (std::size_t i = 0; i < 3; ++i) {
    FractionVector axis;
    axis[i] = Fraction(1);
    std::int64_t multiple = 1;
    for (const Fraction x : group.lattice().coordinates(axis))
      multiple = std::lcm(multiple, x.denominator());
    result.P[i][i] = Fraction(multiple);
  }
  for (const auto& [operation, primed] : group.operations())
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < 3; ++j)
        if (!(Fraction(operation.rotation[i][j]) * result.P[j][j] / result.P[i][i]).is_integer())
          return group.transformation();
  return result;
}

std::string magnetic_cif(const CommensurateStructure& structure) {
  const WrittenGroup group = written_group(structure.group);
  const FractionMatrix to_cell = inverse(group.cell.P);
  const Cell cell = cell_of(structure.parent.cell, group.cell.P);
  const BasisTransformation& standard = structure.group.transformation();
  const BasisTransformation rest{product(to_cell, standard.P),
                                 times(to_cell, standard.p - group.cell.p)};

  std::string result = "data_" + cif_block_name(structure.parent.title) + "\n\n";
  result += cif_parent(structure.parent, group.cell);
  result += cif_item("_space_group_magn.number_BNS", cif_quoted(structure.group.bns_number()));
  result += cif_item("_space_group_magn.name_BNS", cif_quoted(structure.group.bns_symbol()));
  result += cif_item("_space_group_magn.number_OG", cif_quoted(structure.group.og_number()));
  result += cif_item("_space_group_magn.name_OG", cif_quoted(structure.group.og_symbol()));
  result += cif_item("_space_group_magn.transform_BNS_Pp_abc", cif_quoted(to_string(rest))) + "\n";
  result += cif_cell(cell);
  result += operation_loop("_space_group_symop_magn_operation", group.representatives);
  result += operation_loop("_space_group_symop_magn_centering", group.centrings);

  const std::vector<PrimedOperation> operations = all_operations(group);
  std::map<FractionVector, Vector3> known;  // position to lattice-basis moment
  std::vector<std::vector<std::string>> sites;
  std::vector<std::vector<std::string>> moments;
  CifLabels labels;
  for (std::size_t n = 0; n < structure.atoms.size(); ++n) {
    const FractionVector position =
        modulo_one(times(to_cell, structure.atoms[n].position - group.cell.p));
    const Vector3 moment =
        times(to_cell, structure.parent.cell.lattice_from_crystal_axes(structure.moments[n]));
    if (const auto before = known.find(position); before != known.end()) {
      for (std::size_t i = 0; i < 3; ++i)
        if (std::abs(before->second[i] - moment[i]) > moment_tolerance)
          throw std::logic_error("the moment at " + to_string(structure.atoms[n].position) +
                                 " does not follow from its equivalents");
      continue;
    }
    std::vector<PrimedRotation> site_group;
    for (const auto& operation : operations) {
      const FractionVector there = modulo_one(operation.operation.apply(position));
      known.emplace(there, image(operation, moment));
      if (there == position) site_group.push_back({operation.operation.rotation, operation.primed});
    }
    const std::string label = labels.next(structure.atoms[n].label);
    sites.push_back(cif_site(structure.atoms[n], label, position));
    if (is_zero(moment)) continue;
    const Vector3 written = cell.crystal_axes_from_lattice(moment);
    std::string form = to_string(moment_form(site_group));
    form = form.substr(1, form.size() - 2);
    moments.push_back({label, cif_number(written[0], 5), cif_number(written[1], 5),
                       cif_number(written[2], 5), form});
  }
  result += cif_loop(cif_site_names(), sites);
  if (!moments.empty())
    result += cif_loop({"_atom_site_moment.label", "_atom_site_moment.crystalaxis_x",
                        "_atom_site_moment.crystalaxis_y", "_atom_site_moment.crystalaxis_z",
                        "_atom_site_moment.symmform"},
                       moments);
  return result;
}

}  // namespace spinsieve
