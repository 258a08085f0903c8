#include "scattering/nuclear.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "scattering/constants.hpp"
#include "scattering/observation.hpp"
#include "scattering/scattering_length.hpp"

namespace spinsieve {
namespace {

std::array<int, 3> opposite(const std::array<int, 3>& hkl) { return {-hkl[0], -hkl[1], -hkl[2]}; }

/// The nuclear lines as a list of their own.
Measurement as_observations(const Measurement& measurement) {
  Measurement result = measurement;
  result.lines.clear();
  result.absences.clear();
  result.scanned.clear();
  for (const NuclearLine& nuclear : measurement.nuclear_lines) {
    ObservedLine& line = result.lines.emplace_back();
    line.position = nuclear.position;
    line.intensity = nuclear.intensity;
    line.sigma = nuclear.sigma;
    if (line.position.index && line.position.index->k_sign != 0)
      throw Error(line.position.place,
                  line.position.text + " among the nuclear lines; they have k_sign 0");
    if (line.position.index) line.position.index->wavevector = 0;
  }
  return result;
}

}  // namespace

NuclearScatterers::NuclearScatterers(const Cell& cell, const SpaceGroup& group,
                                     std::span<const MagneticSite> magnetic_sites,
                                     std::span<const NuclearSite> other_sites)
    : cell_(cell), primitive_cells_(static_cast<double>(group.centrings().size())) {
  for (const MagneticSite& site : magnetic_sites)
    add(group, site.site, site.ion.ion.element, site.displacement, site.occupancy);
  for (const NuclearSite& site : other_sites)
    add(group, site.site, site.element, site.displacement, site.occupancy);
}

void NuclearScatterers::add(const SpaceGroup& group, const Site& site, const std::string& element,
                            const Displacement& displacement, double occupancy) {
  const std::complex<double> amplitude = checked_occupancy(occupancy, site) *
                                         scattering_length(element, site.place).complex_length_fm();
  const DebyeWaller damping(displacement, cell_, group, site);
  const std::optional<std::string> warning = absorber_warning(element);
  if (warning && std::ranges::find(warnings_, *warning) == warnings_.end())
    warnings_.push_back(*warning);
  const Orbit orbit(group, site.position);
  for (const OrbitAtom& atom : orbit.atoms()) {
    const IntMatrix& R = group.operations()[atom.operation].rotation;
    nuclei_.push_back({to_double(atom.position), amplitude, damping.moved(R)});
  }
}

std::complex<double> NuclearScatterers::structure_factor(const std::array<int, 3>& hkl) const {
  const Vector3 h = {static_cast<double>(hkl[0]), static_cast<double>(hkl[1]),
                     static_cast<double>(hkl[2])};
  const double s = s_from_q(cell_.q(h));
  std::complex<double> F;
  for (const Nucleus& nucleus : nuclei_) {
    const Vector3& r = nucleus.position;
    const double turns = h[0] * r[0] + h[1] * r[1] + h[2] * r[2];
    const double damping =
        nucleus.displacement.isotropic_factor(s) * nucleus.displacement.anisotropic_factor(h);
    F += nucleus.amplitude * damping * std::polar(1.0, 2 * std::numbers::pi * turns);
  }
  return primitive_cells_ * F;
}

double NuclearScatterers::line_barn(const ReflectionTable& table, const PowderLine& line) const {
  double sum = 0;
  for (const Reflection& reflection : table.reflections(line)) {
    if (reflection.k_sign != 0) continue;
    // Absorption makes the two of a pair differ where there is no centre.
    sum += std::norm(structure_factor(reflection.hkl)) +
           std::norm(structure_factor(opposite(reflection.hkl)));
  }
  return sum / fm2_per_barn;
}

NuclearScale fit_nuclear_scale(const Cell& cell, const SpaceGroup& group,
                               const NuclearScatterers& nuclei, const Measurement& measurement) {
  if (measurement.nuclear_lines.empty())
    throw Error(measurement.place, "scale: nuclear without nuclear lines; give nuclear_lines");
  const std::vector<Arm> arms = {{FractionVector{}, 0}};
  const ObservationPlan plan(cell, group, arms, as_observations(measurement));
  NuclearScale result;
  std::vector<double> sigmas;
  double weighted_product = 0;
  double weighted_square = 0;
  for (std::size_t g = 0; g < plan.groups().size(); ++g) {
    const ObservationGroup& lines = plan.groups()[g];
    double barn = 0;
    for (const std::size_t i : lines.table_lines)
      barn += plan.lorentz(i) * nuclei.line_barn(plan.table(), plan.table().lines()[i]);
    for (const DomainReflection& domain : lines.domain_reflections)
      barn += plan.group_lorentz(g) * domain.share *
              std::norm(nuclei.structure_factor(domain.reflection.hkl)) / fm2_per_barn;
    const double weight = 1 / (lines.sigma * lines.sigma);
    weighted_product += weight * barn * lines.observed;
    weighted_square += weight * barn * barn;
    result.observed.push_back(lines.observed);
    result.calculated.push_back(barn);
    result.labels.push_back(lines.label);
    sigmas.push_back(lines.sigma);
  }
  if (weighted_square <= 0)
    throw Error(measurement.place,
                "no nuclear line contains a reflection of the crystal; check positions and cell");
  result.scale = weighted_product / weighted_square;
  result.sigma = 1 / std::sqrt(weighted_square);
  for (std::size_t g = 0; g < sigmas.size(); ++g) {
    result.calculated[g] *= result.scale;
    result.chi2 += std::pow((result.observed[g] - result.calculated[g]) / sigmas[g], 2);
  }
  if (result.scale <= 0)
    throw Error(measurement.place, "the nuclear lines give the scale " +
                                       std::to_string(result.scale) + "; it must be positive");
  return result;
}

}  // namespace spinsieve
