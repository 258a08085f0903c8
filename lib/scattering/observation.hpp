#pragma once

#include <cstddef>
#include <span>
#include <string>
#include <vector>

#include <Eigen/Core>

#include "scattering/magnetic_scatterers.hpp"
#include "scattering/measurement.hpp"
#include "scattering/reflection.hpp"

namespace spinsieve {

/// What a data point says of the computed intensity I of its group.
enum class PointKind {
  line,      ///< I = observed ± sigma.
  absence,   ///< I = 0 ± sigma, sigma = below/1.645.
  at_least,  ///< Only seen: I ≥ observed, with sigma below it.
  at_most    ///< May be foreign: I ≤ observed, with sigma above it.
};

/// σ of an upper limit at 95 %: one-sided quantile of the normal distribution.
constexpr double limit_per_sigma = 1.645;

/// A reflection of a single crystal that some domain brings to the observed Q, with the share of
/// the crystal that does.
struct DomainReflection {
  Reflection reflection;
  double share = 1;
};

/// Entries of a measurement whose windows overlap, and the computed lines inside.
struct ObservationGroup {
  PointKind kind = PointKind::line;
  double observed = 0;  ///< Sum over the entries; 0 for absences.
  double sigma = 0;     ///< Entries added in quadrature.
  double q_low = 0;     ///< Å⁻¹.
  double q_high = 0;
  std::vector<std::size_t> lines;                    ///< Into Measurement::lines.
  std::vector<std::size_t> absences;                 ///< Into Measurement::absences.
  std::size_t scanned = 0;                           ///< Absences computed from scanned ranges.
  std::vector<std::size_t> table_lines;              ///< Powder: into ReflectionTable::lines().
  std::vector<DomainReflection> domain_reflections;  ///< Single crystal.
  std::string label;     ///< The entries as the user wrote them: "q 1.157 + q 1.163".
  std::string contents;  ///< What it contains: "(1 0 1) ×8, (0 2 0) ×2"; empty when nothing.
};

/// The points of one measurement for the lattice and wavevectors of a job, before any candidate.
///
/// Powder: every entry owns its window, computed lines in scanned ranges that no entry owns become
/// absences (unresolved ones together), windows that overlap merge and their intensities add; a
/// computed line outside all windows is unmeasured. A group with both a foreign line and one that
/// was only seen says nothing and is left out.
/// Single crystal: one group an entry, which must be given by hkl. Domains that the operations of
/// the group make from one another are equally populated: intensities are averages over them.
class ObservationPlan {
 public:
  /// arms: every arm that some candidate uses; the first of each wavevector is the one that the
  /// indices of a single-crystal list refer to. Never both k and −k.
  /// Throws Error at the entry's place: Q out of reach of the wavelength, σ or limit not positive,
  /// an entry of a single-crystal list without hkl or with hkl that is no reflection.
  ObservationPlan(const Cell& cell, const SpaceGroup& group, std::span<const Arm> arms,
                  const Measurement& measurement);

  const ReflectionTable& table() const noexcept { return table_; }
  std::span<const ObservationGroup> groups() const noexcept { return groups_; }
  /// Powder: computed lines up to the largest Q of interest that no window contains.
  std::span<const std::size_t> unmeasured() const noexcept { return unmeasured_; }
  /// Lorentz factor of a computed line, 1 when the list has it removed.
  double lorentz(std::size_t table_line) const { return lorentz_[table_line]; }
  double group_lorentz(std::size_t group) const { return group_lorentz_[group]; }  ///< Crystal.

 private:
  void plan_powder(const Measurement& measurement);
  void plan_crystal(const Cell& cell, const SpaceGroup& group, const Measurement& measurement);

  ReflectionTable table_;
  std::vector<ObservationGroup> groups_;
  std::vector<std::size_t> unmeasured_;
  std::vector<double> lorentz_;
  std::vector<double> group_lorentz_;
};

/// One point for the ranking: I = scale · cᵀ form c.
struct DataPoint {
  Eigen::MatrixXd form;  ///< n×n, symmetric, positive semidefinite: barn times Lorentz factor.
  double observed = 0;
  double sigma = 0;
  PointKind kind = PointKind::line;
  std::size_t group = 0;  ///< Into ObservationPlan::groups(), with label and contents.
};

/// The points of one candidate, one a group, in order. Every arm of the field must be among the
/// plan's (std::logic_error otherwise).
std::vector<DataPoint> data_points(const ObservationPlan& plan,
                                   const MagneticScatterers& scatterers, const MomentField& field);

}  // namespace spinsieve
