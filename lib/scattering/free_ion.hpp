#pragma once

#include <optional>

#include "crystal/ion.hpp"
#include "exact/fraction.hpp"

namespace spinsieve {

/// Ground term of n equivalent electrons by Hund's rules.
struct HundTerm {
  Fraction S;
  int L = 0;
  Fraction J;

  /// Landé factor g = 3/2 + (S(S+1) − L(L+1)) / (2J(J+1)); none for J = 0.
  std::optional<Fraction> lande_g() const;
  double saturation_moment() const;    ///< g J, µB; 0 for J = 0.
  double paramagnetic_moment() const;  ///< g √(J(J+1)), µB; 0 for J = 0.
};

/// orbital: l of the shell, 2 for d and 3 for f. Throws std::logic_error unless
/// 0 ≤ electrons ≤ 4 l + 2.
HundTerm hund_term(int orbital, int electrons);

enum class Shell { d3, d4, d5, f4, f5 };

/// The open shell of a magnetic ion and how many electrons it holds.
struct OpenShell {
  Shell shell = Shell::d3;
  int electrons = 0;
};

/// All electrons beyond the noble-gas core counted in the open shell, as in ions of charge 2 and
/// more; none for other elements, for lower charges (where s electrons remain) and for charges that
/// would empty the core. Gd2+ is 4f⁷ 5d¹ (its free-ion spectrum) and counts 7.
std::optional<OpenShell> open_shell(const Ion& ion);

/// Moment 2S of a 3d ion with a quenched orbit, µB; none unless open_shell() is 3d.
std::optional<double> spin_only_saturation_moment(const Ion& ion);
/// 2√(S(S+1)), µB.
std::optional<double> spin_only_paramagnetic_moment(const Ion& ion);

}  // namespace spinsieve
