#pragma once

#include <optional>
#include <string>
#include <vector>

#include "scattering/scatterer.hpp"

namespace spinsieve {

/// The ⟨j_l⟩ of one ion as tabulated: l = 0, 2, 4, 6.
struct TabulatedIntegrals {
  Ion ion;
  std::optional<RadialCoefficients> j0, j2, j4, j6;
};

/// All ions of the table, in its order (elements by series, then charge).
/// Source: International Tables C (2006), 4.4.5, tables 4.4.5.1-4.4.5.8 (data/form_factors.csv).
const std::vector<TabulatedIntegrals>& tabulated_integrals();

/// A e^(−a s²) + B e^(−b s²) + C e^(−c s²) + D, times s² unless order is 0.
/// order: 0, 2, 4, 6; s = sinθ/λ in Å⁻¹. Source: International Tables C (2006), 4.4.5.
double radial_integral(int order, const RadialCoefficients& coefficients, double s);

/// Weight c₂ of ⟨j2⟩ and where it comes from, for the reports.
struct OrbitalWeight {
  double c2 = 0;
  std::string reason;  ///< "Landé g = 4/3 of 4f10", "spin only", "given".
};

/// c₂ = µ_L/µ, the orbital part of the moment.
///
/// Given lande_g: 2/g − 1; given spin_g: 1 − 2/g; given c2: itself. Else 4f ions and trivalent 5f
/// ions take the Landé factor of their Hund ground term, all others than f ions 0.
/// Throws Error (at the ion's place) when more than one of the three is given, when a g is not
/// positive, and where no default exists: J = 0 (4f⁶), f ions that are not covered.
/// Source: Marshall & Lovesey (1971), Theory of Thermal Neutron Scattering, ch. 6.
OrbitalWeight orbital_weight(const MagneticIon& ion);

/// Form factor of an ion in the dipole approximation, f = ⟨j0⟩ + c₂⟨j2⟩.
class FormFactor {
 public:
  /// Throws Error (at the ion's place) when ⟨j0⟩ is neither given nor tabulated, naming the
  /// tabulated ions of the element, when c₂ ≠ 0 and ⟨j2⟩ is missing, and as orbital_weight.
  explicit FormFactor(const MagneticIon& ion);

  /// s: sinθ/λ in Å⁻¹, 0 ≤ s ≤ 2. Result without unit; within 2e-3 of 1 at s = 0, where the
  /// tabulated fits do not give 1 exactly.
  double operator()(double s) const;
  const OrbitalWeight& weight() const noexcept { return weight_; }
  /// True when both give the same value at every s.
  bool same_function(const FormFactor& other) const {
    return j0_ == other.j0_ && weight_.c2 == other.weight_.c2 &&
           (weight_.c2 == 0 || j2_ == other.j2_);
  }

 private:
  RadialCoefficients j0_{};
  std::optional<RadialCoefficients> j2_;
  OrbitalWeight weight_;
};

}  // namespace spinsieve
