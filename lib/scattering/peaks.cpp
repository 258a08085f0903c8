#include "scattering/peaks.hpp"

#include <algorithm>
#include <numbers>

#include "scattering/constants.hpp"
#include "scattering/geometry.hpp"
#include "scattering/intensity_form.hpp"

namespace spinsieve {

std::vector<Peak> peaks(const MagneticScatterers& scatterers, const NuclearScatterers* nuclei,
                        const MomentField& field, std::span<const double> parameters,
                        std::span<const Arm> arms, const Geometry& geometry, double q_max) {
  const SpaceGroup& group = scatterers.group();
  std::vector<Arm> all_arms(arms.begin(), arms.end());
  const bool fundamental = std::ranges::any_of(
      arms, [&](const Arm& arm) { return arm_kind(group, arm.k) == ArmKind::fundamental; });
  if (nuclei != nullptr && !fundamental) all_arms.push_back({FractionVector{}, 0});
  const ReflectionTable table(scatterers.cell(), group, all_arms, 0, q_max);
  std::vector<std::size_t> lines(table.lines().size());
  for (std::size_t i = 0; i < lines.size(); ++i) lines[i] = i;
  const std::vector<IntensityForm> forms = line_forms(scatterers, field, table, lines);
  const Eigen::VectorXd c = Eigen::Map<const Eigen::VectorXd>(
      parameters.data(), static_cast<Eigen::Index>(parameters.size()));
  std::vector<Peak> result;
  result.reserve(lines.size());
  for (std::size_t i = 0; i < lines.size(); ++i) {
    const PowderLine& line = table.lines()[i];
    Peak& peak = result.emplace_back();
    peak.q = line.q;
    peak.d = 2 * std::numbers::pi / line.q;
    peak.two_theta_degrees = two_theta_degrees(geometry, line.q);
    peak.multiplicity = line.multiplicity;
    for (const Reflection& reflection : table.all_reflections(line))
      peak.indices.push_back(
          {reflection.hkl, reflection.k_sign, table.arms()[reflection.arm].wavevector});
    peak.label = table.label(line);
    peak.f_perp_squared = forms[i].mu_b2(c);
    peak.magnetic_barn = barn_per_mu_b2 * peak.f_perp_squared;
    if (nuclei != nullptr) peak.nuclear_barn = nuclei->line_barn(table, line);
  }
  return result;
}

}  // namespace spinsieve
