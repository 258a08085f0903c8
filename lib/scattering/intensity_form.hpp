#pragma once

#include <span>
#include <vector>

#include <Eigen/Core>

#include "scattering/magnetic_scatterers.hpp"

namespace spinsieve {

/// A symmetric positive semidefinite n×n matrix M with |F⊥|² = cᵀ M c for the n parameters of a
/// moment field, summed over some reflections: µB² per conventional parent cell.
class IntensityForm {
 public:
  IntensityForm() = default;
  explicit IntensityForm(Eigen::MatrixXd mu_b2) : mu_b2_(std::move(mu_b2)) {}

  const Eigen::MatrixXd& mu_b2() const noexcept { return mu_b2_; }  ///< |F⊥|², µB².
  Eigen::MatrixXd barn() const;                                     ///< p²|F⊥|², barn.
  double mu_b2(const Eigen::VectorXd& c) const { return c.dot(mu_b2_ * c); }

 private:
  Eigen::MatrixXd mu_b2_;
};

/// One form per powder line, multiplicity in: index i of the result is table.lines()[lines[i]].
///
/// Every arm of the field must have its k among table.arms(), component for component
/// (std::logic_error otherwise); lines of other arms get zero forms.
/// Cost: 24 flop per atom × parameter × stored reflection (12 where the components are real),
/// atoms without a component in a parameter left out.
std::vector<IntensityForm> line_forms(const MagneticScatterers& scatterers,
                                      const MomentField& field, const ReflectionTable& table,
                                      std::span<const std::size_t> lines);

/// One form per reflection, in order. REQUIRES: reflection.arm indexes field.arms.
std::vector<IntensityForm> reflection_forms(const MagneticScatterers& scatterers,
                                            const MomentField& field,
                                            std::span<const Reflection> reflections);

}  // namespace spinsieve
