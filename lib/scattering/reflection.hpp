#pragma once

#include <array>
#include <cstddef>
#include <span>
#include <string>
#include <vector>

#include "crystal/cell.hpp"
#include "crystal/space_group.hpp"
#include "scattering/measurement.hpp"

namespace spinsieve {

/// One arm of a propagation vector: exact components, not symbolic.
struct Arm {
  FractionVector k;
  std::size_t wavevector = 0;  ///< Which of the job's propagation vectors it belongs to.
};

/// How the satellites of an arm are counted: fundamental (k is a reciprocal-lattice vector, k_sign
/// is 0), self_conjugate (2k is one: τ + k and τ − k are one reflection, k_sign is +1), or pair.
enum class ArmKind { fundamental, self_conjugate, pair };
ArmKind arm_kind(const SpaceGroup& group, const FractionVector& k);

/// A reflection of one arm: Q = 2π(hkl + k_sign·k).
struct Reflection {
  std::array<int, 3> hkl{};
  int k_sign = 0;
  std::size_t arm = 0;
  Vector3 q{};          ///< Cartesian, Å⁻¹.
  double q_length = 0;  ///< Å⁻¹.
};

/// Reflections of equal |Q|, of one domain.
struct PowderLine {
  double q = 0;                  ///< Å⁻¹.
  std::size_t first = 0;         ///< Into ReflectionTable::reflections().
  std::size_t count = 0;         ///< Stored reflections: one of each pair Q, −Q.
  std::size_t multiplicity = 0;  ///< All reflections: 2 · count.
};

/// All reflections τ ± k of some arms in a range of Q, in powder lines of increasing Q.
///
/// τ runs over the reciprocal lattice, centrings respected; Q = 0 is left out. Of Q and −Q, which
/// have equal unpolarised intensity, one is stored: for a pair arm the one with k_sign +1, else the
/// one whose first non-zero component is positive. Lines hold what symmetry makes equal (|Q| comes
/// from the metric averaged over the point group) and what coincides within 1e-9 of Q.
class ReflectionTable {
 public:
  ReflectionTable() = default;
  /// q_min < q_max in Å⁻¹. Throws LimitReached when more than 5 million reflections are asked for.
  ReflectionTable(const Cell& cell, const SpaceGroup& group, std::span<const Arm> arms,
                  double q_min, double q_max);

  std::span<const Arm> arms() const noexcept { return arms_; }
  ArmKind kind(std::size_t arm) const { return kinds_.at(arm); }
  std::span<const Reflection> reflections() const noexcept { return reflections_; }
  std::span<const PowderLine> lines() const noexcept { return lines_; }
  std::span<const Reflection> reflections(const PowderLine& line) const {
    return reflections().subspan(line.first, line.count);
  }

  /// The reflection at −Q.
  Reflection opposite(const Reflection& reflection) const;
  /// All reflections of a line, both of each pair, nicest index first.
  std::vector<Reflection> all_reflections(const PowderLine& line) const;
  /// "(1 0 1)", "(0 1 0)+k", "(1 0 1)-k2": the k number is left out where there is one wavevector.
  std::string label(const Reflection& reflection) const;
  /// The label of the nicest index, as "(1 0 1) ×8".
  std::string label(const PowderLine& line) const;

 private:
  std::vector<Arm> arms_;
  std::vector<ArmKind> kinds_;
  std::vector<Reflection> reflections_;
  std::vector<PowderLine> lines_;
};

/// Relative difference of Q below which reflections share a line.
constexpr double same_q_tolerance = 1e-9;

}  // namespace spinsieve
