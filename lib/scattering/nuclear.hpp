#pragma once

#include <complex>
#include <span>
#include <string>
#include <vector>

#include "scattering/displacement.hpp"
#include "scattering/measurement.hpp"
#include "scattering/reflection.hpp"

namespace spinsieve {

/// All nuclei of a crystal, magnetic ions among them.
class NuclearScatterers {
 public:
  /// Throws Error, at the place of the site, as scattering_length, DebyeWaller and
  /// checked_occupancy do.
  NuclearScatterers(const Cell& cell, const SpaceGroup& group,
                    std::span<const MagneticSite> magnetic_sites,
                    std::span<const NuclearSite> other_sites);

  /// F_N = Σ b T exp(2πi hkl·r) over one conventional cell, fm; b = b' − i b″.
  /// REQUIRES: hkl is a reciprocal-lattice vector, centring respected.
  std::complex<double> structure_factor(const std::array<int, 3>& hkl) const;

  /// |F_N|² summed over a powder line, multiplicity in, barn per conventional cell. Only the
  /// reflections of fundamental arms (k_sign 0) count.
  double line_barn(const ReflectionTable& table, const PowderLine& line) const;

  /// Sentences for the report: strong absorbers among the elements.
  const std::vector<std::string>& warnings() const noexcept { return warnings_; }

 private:
  struct Nucleus {
    Vector3 position;
    std::complex<double> amplitude;  ///< Occupancy · b, fm.
    DebyeWaller displacement;
  };
  void add(const SpaceGroup& group, const Site& site, const std::string& element,
           const Displacement& displacement, double occupancy);

  Cell cell_;
  double primitive_cells_ = 1;
  std::vector<Nucleus> nuclei_;  ///< Of one primitive cell.
  std::vector<std::string> warnings_;
};

/// Scale from nuclear lines: observed intensity = scale · (barn · Lorentz factor).
struct NuclearScale {
  double scale = 0;
  double sigma = 0;  ///< From the σ of the lines alone.
  double chi2 = 0;
  std::vector<double> observed;    ///< By group of lines whose windows overlap.
  std::vector<double> calculated;  ///< scale · barn · Lorentz factor.
  std::vector<std::string> labels;
};

/// Weighted linear fit to Measurement::nuclear_lines, windows and single-crystal domains as in
/// ObservationPlan. Throws Error (at the measurement's place) when there are no nuclear lines, when
/// none of them contains a reflection, and as ObservationPlan.
NuclearScale fit_nuclear_scale(const Cell& cell, const SpaceGroup& group,
                               const NuclearScatterers& nuclei, const Measurement& measurement);

}  // namespace spinsieve
