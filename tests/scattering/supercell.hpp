#pragma once

#include <cmath>
#include <complex>
#include <map>
#include <numbers>
#include <random>
#include <vector>

#include "exact/phase.hpp"
#include "scattering/intensity_form.hpp"
#include "scattering/structure_factor.hpp"

namespace spinsieve::test {

/// A moment in real space: fractional position in the parent cell, Cartesian µB.
struct PlacedMoment {
  std::size_t site;
  Vector3 position;
  Vector3 moment;
};

/// All moments of a box of N1×N2×N3 conventional cells, from the definition
/// m_j(L) = S_j exp(+2πi k·L) + c.c. (no conjugate where 2k is a reciprocal-lattice vector).
inline std::vector<PlacedMoment> place_moments(const Cell& cell, const SpaceGroup& group,
                                               const MomentField& field,
                                               const std::vector<double>& c,
                                               const std::array<int, 3>& size) {
  std::vector<PlacedMoment> placed;
  for (const FourierField& arm : field.arms)
    for (std::size_t j = 0; j < arm.atoms.size(); ++j)
      for (const FractionVector& centring : group.centrings())
        for (int x = 0; x < size[0]; ++x)
          for (int y = 0; y < size[1]; ++y)
            for (int z = 0; z < size[2]; ++z) {
              const FractionVector L = centring + FractionVector{x, y, z};
              const std::complex<double> turn = Phase(dot(arm.k, L)).factor();
              Vector3 m{};
              for (std::size_t p = 0; p < c.size(); ++p)
                for (std::size_t i = 0; i < 3; ++i) {
                  const std::complex<double> wave = c[p] * arm.component(p, j)[i] * turn;
                  m[i] += arm.self_conjugate ? wave.real() : 2 * wave.real();
                }
              placed.push_back({arm.atoms[j].site, to_double(arm.atoms[j].position + L),
                                cell.cartesian_from_crystal_axes(m)});
            }
  return placed;
}

/// |F⊥|² per conventional cell at components hkl (not integers) by summing over the whole box.
inline double box_intensity(const MagneticScatterers& scatterers,
                            const std::vector<PlacedMoment>& moments, const Vector3& hkl,
                            double cells) {
  const Vector3 q = scatterers.cell().scattering_vector(hkl);
  const double length = std::hypot(q[0], q[1], q[2]);
  ComplexVector3 F{};
  for (const PlacedMoment& atom : moments) {
    const double turns =
        hkl[0] * atom.position[0] + hkl[1] * atom.position[1] + hkl[2] * atom.position[2];
    const std::complex<double> phase = std::polar(1.0, 2 * std::numbers::pi * turns);
    const double f = scatterers.weight(atom.site, length);
    for (std::size_t i = 0; i < 3; ++i) F[i] += f * phase * atom.moment[i];
  }
  return squared_length(perpendicular(F, q)) / (cells * cells);
}

/// |Q| → summed intensity of everything the box scatters below q_max, |Q| rounded to 1e-7.
inline std::map<long, double> box_pattern(const MagneticScatterers& scatterers,
                                          const std::vector<PlacedMoment>& moments,
                                          const std::array<int, 3>& size, double q_max) {
  const Cell& cell = scatterers.cell();
  const Vector3 lengths = {cell.a(), cell.b(), cell.c()};
  std::array<int, 3> reach{};
  for (std::size_t i = 0; i < 3; ++i)
    reach[i] = static_cast<int>(q_max * lengths[i] / (2 * std::numbers::pi) * size[i]) + 1;
  const double cells = size[0] * size[1] * size[2];
  std::map<long, double> pattern;
  for (int h = -reach[0]; h <= reach[0]; ++h)
    for (int k = -reach[1]; k <= reach[1]; ++k)
      for (int l = -reach[2]; l <= reach[2]; ++l) {
        if (h == 0 && k == 0 && l == 0) continue;
        const Vector3 hkl = {static_cast<double>(h) / size[0], static_cast<double>(k) / size[1],
                             static_cast<double>(l) / size[2]};
        const double q = cell.q(hkl);
        if (q >= q_max) continue;
        pattern[std::lround(q * 1e7)] += box_intensity(scatterers, moments, hkl, cells);
      }
  return pattern;
}

/// A field of random components on all atoms of the sites' orbits: complex and without centre.
inline FourierField random_field(const SpaceGroup& group, const std::vector<MagneticSite>& sites,
                                 const FractionVector& k, std::size_t parameters,
                                 std::mt19937& random) {
  FourierField field;
  field.k = k;
  field.self_conjugate = arm_kind(group, k) != ArmKind::pair;
  for (std::size_t site = 0; site < sites.size(); ++site) {
    const Orbit orbit(group, sites[site].site.position);
    for (const OrbitAtom& atom : orbit.atoms()) field.atoms.push_back({site, atom.position});
  }
  const auto draw = [&random] { return static_cast<double>(random() % 2001) / 1000 - 1; };
  for (std::size_t i = 0; i < parameters * field.atoms.size(); ++i) {
    FourierField::Component component;
    for (std::complex<double>& entry : component) {
      const double re = draw();
      entry = {re, field.self_conjugate ? 0 : draw()};
    }
    field.components.push_back(component);
  }
  return field;
}

}  // namespace spinsieve::test
