#include <algorithm>
#include <cmath>
#include <numbers>
#include <set>
#include <stdexcept>

#include "report/cif_text.hpp"
#include "report/magnetic_cif.hpp"

namespace spinsieve {
namespace {

using Component = std::array<std::complex<double>, 3>;

/// Equivalent atoms must agree to this, in µB: their components come from one exact field.
constexpr double moment_tolerance = 1e-6;

/// {R|t} in superspace: x' = R x + t, x4' = ε x4 + H·x + τ, with k R = ε k + H.
struct SuperspaceAction {
  int epsilon = 1;
  FractionVector H{};
  Fraction tau;
};

SuperspaceAction action(const SuperspaceOperation& operation, const FractionVector& k) {
  SuperspaceAction result;
  result.epsilon = operation.reversing ? -1 : 1;
  result.H = row_times(k, operation.operation.rotation) - Fraction(result.epsilon) * k;
  result.tau = (dot(k, operation.operation.translation) + operation.phase.turns()).modulo_one();
  return result;
}

void add_term(std::string& text, Fraction factor, const std::string& name) {
  if (factor.is_zero()) return;
  const Fraction size = factor < Fraction(0) ? -factor : factor;
  if (factor < Fraction(0))
    text += '-';
  else if (!text.empty())
    text += '+';
  if (name.empty() || size != Fraction(1)) text += to_string(size);
  text += name;
}

/// S exp(−2πi k·r), which refers to the phase k·r instead of the listed atom.
Component at_phase_origin(const Component& component, const FractionVector& k,
                          const FractionVector& position) {
  const std::complex<double> factor = std::conj(Phase(dot(k, position)).factor());
  Component result;
  for (std::size_t i = 0; i < 3; ++i) result.at(i) = component.at(i) * factor;
  return result;
}

/// The component, referred to the phase origin, that an operation makes of one.
Component image(const SuperspaceOperation& operation, const FractionVector& k, const Cell& cell,
                const FractionVector& position, const Component& component) {
  const auto& [epsilon, H, tau] = action(operation, k);
  const IntMatrix& R = operation.operation.rotation;
  // M'(x4') = σ R M(x4) with M = S exp(2πi x4) + c.c.: S, or S* for ε = −1, and exp(−2πi (H·x +
  // τ)).
  const std::complex<double> shift = std::conj(Phase(dot(H, position) + tau).factor());
  Component result{};
  for (const bool imaginary : {false, true}) {
    Vector3 part{};
    for (std::size_t i = 0; i < 3; ++i)
      part.at(i) = imaginary ? component.at(i).imag() * epsilon : component.at(i).real();
    part = cell.lattice_from_crystal_axes(part);
    Vector3 turned{};
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < 3; ++j)
        turned[i] += determinant(R) * (operation.primed ? -1 : 1) * R[i][j] * part[j];
    turned = cell.crystal_axes_from_lattice(turned);
    for (std::size_t i = 0; i < 3; ++i)
      result.at(i) += imaginary ? std::complex(0.0, turned.at(i)) : std::complex(turned.at(i));
  }
  for (auto& x : result) x *= shift;
  return result;
}

bool agree(const Component& a, const Component& b) {
  for (std::size_t i = 0; i < 3; ++i)
    if (std::abs(a.at(i) - b.at(i)) > moment_tolerance) return false;
  return true;
}

/// The centrings, which leave x4 as it is, and time reversal with half a period.
std::vector<SuperspaceOperation> centring_operations(const ModulatedStructure& structure,
                                                     const FractionVector& k) {
  std::vector<SuperspaceOperation> result;
  for (const bool primed : {false, true})
    for (const FractionVector& centring : structure.centrings) {
      SuperspaceOperation operation;
      operation.operation.translation = centring;
      operation.primed = primed;
      operation.phase = Phase(primed ? 1 : 0, 2) - Phase(dot(k, centring));
      result.push_back(operation);
    }
  return result;
}

std::string operation_loop(const std::string& category,
                           const std::vector<SuperspaceOperation>& operations,
                           const FractionVector& k) {
  std::vector<std::vector<std::string>> rows;
  rows.reserve(operations.size());
  for (const auto& operation : operations)
    rows.push_back({std::to_string(rows.size() + 1), cif_quoted(superspace_text(operation, k))});
  return cif_loop({category + ".id", category + ".algebraic"}, rows);
}

}  // namespace

std::string superspace_text(const SuperspaceOperation& operation, const FractionVector& k) {
  const auto& [epsilon, H, tau] = action(operation, k);
  std::string result;
  for (std::size_t i = 0; i < 3; ++i) {
    std::string row;
    for (std::size_t j = 0; j < 3; ++j)
      add_term(row, operation.operation.rotation[i][j], "x" + std::to_string(j + 1));
    add_term(row, operation.operation.translation[i].modulo_one(), "");
    result += row + ",";
  }
  std::string row;
  for (std::size_t j = 0; j < 3; ++j) add_term(row, H[j], "x" + std::to_string(j + 1));
  add_term(row, Fraction(epsilon), "x4");
  add_term(row, tau, "");
  return result + row + (operation.primed ? ",-1" : ",+1");
}

std::string magnetic_cif(const ModulatedStructure& structure) {
  if (structure.parent.propagation.size() != 1)
    throw std::logic_error("a modulated magnetic CIF needs exactly one wavevector");
  const FractionVector& k = structure.parent.propagation.front();
  const std::vector<SuperspaceOperation> centrings = centring_operations(structure, k);

  std::string result = "data_" + cif_block_name(structure.parent.title) + "\n\n";
  result += cif_parent(structure.parent, {});
  result += cif_item("_cell_modulation_dimension", "1");
  result += cif_cell(structure.parent.cell);
  result += cif_loop({"_cell_wave_vector_seq_id", "_cell_wave_vector_x", "_cell_wave_vector_y",
                      "_cell_wave_vector_z"},
                     {{"1", cif_coordinate(k[0]), cif_coordinate(k[1]), cif_coordinate(k[2])}});
  result += operation_loop("_space_group_symop_magn_ssg_operation", structure.operations, k);
  result += operation_loop("_space_group_symop_magn_ssg_centering", centrings, k);

  std::vector<std::pair<FractionVector, Component>> known;
  std::vector<std::vector<std::string>> sites;
  std::vector<std::vector<std::string>> averages;
  std::vector<std::vector<std::string>> waves;
  CifLabels labels;
  for (std::size_t n = 0; n < structure.atoms.size(); ++n) {
    const FractionVector position = structure.atoms[n].position;
    const Component component = at_phase_origin(structure.components[n], k, position);
    const auto before = std::ranges::find_if(
        known, [&](const auto& entry) { return is_integer(entry.first - position); });
    if (before != known.end()) {
      if (!agree(before->second, component))
        throw std::logic_error("the moment at " + to_string(position) +
                               " does not follow from its equivalents");
      continue;
    }
    for (const auto& centring : centrings) {
      for (const auto& operation : structure.operations) {
        const FractionVector there = operation.operation.apply(position);
        known.emplace_back(centring.operation.apply(there),
                           image(centring, k, structure.parent.cell, there,
                                 image(operation, k, structure.parent.cell, position, component)));
      }
    }
    const std::string label = labels.next(structure.atoms[n].label);
    sites.push_back(cif_site(structure.atoms[n], label, position));
    if (agree(component, {})) continue;
    averages.push_back({label, "0", "0", "0"});
    for (std::size_t i = 0; i < 3; ++i) {
      const std::string axis(1, static_cast<char>('x' + static_cast<char>(i)));
      waves.push_back({std::to_string(waves.size() + 1), label, axis, "1",
                       cif_number(2 * component.at(i).real(), 5),
                       cif_number(-2 * component.at(i).imag(), 5)});
    }
  }
  result += cif_loop(cif_site_names(), sites);
  if (waves.empty()) return result;
  result += cif_loop({"_atom_site_moment.label", "_atom_site_moment.crystalaxis_x",
                      "_atom_site_moment.crystalaxis_y", "_atom_site_moment.crystalaxis_z"},
                     averages);
  result +=
      cif_loop({"_atom_site_Fourier_wave_vector_seq_id", "_atom_site_Fourier_wave_vector_q1_coeff"},
               {{"1", "1"}});
  result +=
      cif_loop({"_atom_site_moment_Fourier.id", "_atom_site_moment_Fourier.atom_site_label",
                "_atom_site_moment_Fourier.axis", "_atom_site_moment_Fourier.wave_vector_seq_id",
                "_atom_site_moment_Fourier_param.cos", "_atom_site_moment_Fourier_param.sin"},
               waves);
  return result;
}

}  // namespace spinsieve
