#include "scattering/intensity_form.hpp"

#include <algorithm>
#include <cstddef>
#include <stdexcept>

#include "scattering/amplitude_kernel.hpp"
#include "scattering/constants.hpp"

namespace spinsieve {
namespace {

/// M = Σ over the rows of B (six per reflection: real and imaginary F⊥), times a weight.
Eigen::MatrixXd gram(const Eigen::MatrixXd& B, Eigen::Index first, Eigen::Index rows,
                     double weight) {
  const Eigen::Index n = B.cols();
  Eigen::MatrixXd M(n, n);
  for (Eigen::Index p = 0; p < n; ++p) {
    for (Eigen::Index q = p; q < n; ++q) {
      M(p, q) = weight * B.col(p).segment(first, rows).dot(B.col(q).segment(first, rows));
      M(q, p) = M(p, q);
    }
  }
  return M;
}

/// hkl − k by its mate at −Q, −hkl + k, which has the same form since the field is real.
Reflection positive(const Reflection& reflection) {
  if (reflection.k_sign >= 0) return reflection;
  Reflection mate = reflection;
  mate.k_sign = 1;
  for (std::size_t i = 0; i < 3; ++i) {
    mate.hkl[i] = -reflection.hkl[i];
    mate.q[i] = -reflection.q[i];
  }
  return mate;
}

}  // namespace

Eigen::MatrixXd IntensityForm::barn() const { return barn_per_mu_b2 * mu_b2_; }

std::vector<IntensityForm> line_forms(const MagneticScatterers& scatterers,
                                      const MomentField& field, const ReflectionTable& table,
                                      std::span<const std::size_t> lines) {
  const auto n = static_cast<Eigen::Index>(field.parameters);
  std::vector<Eigen::MatrixXd> sums(lines.size(), Eigen::MatrixXd::Zero(n, n));
  for (const FourierField& arm_field : field.arms) {
    const auto arm = std::ranges::find(table.arms(), arm_field.k, &Arm::k);
    if (arm == table.arms().end())
      throw std::logic_error("the reflections of k = " + to_string(arm_field.k) + " are missing");
    const std::size_t arm_index = static_cast<std::size_t>(arm - table.arms().begin());
    std::vector<Reflection> selected;
    std::vector<std::size_t> counts(lines.size());
    for (std::size_t i = 0; i < lines.size(); ++i) {
      const PowderLine& line = table.lines()[lines[i]];
      for (const Reflection& reflection : table.reflections(line)) {
        if (reflection.arm != arm_index) continue;
        selected.push_back(reflection);
        ++counts[i];
      }
    }
    const Eigen::MatrixXd B = perpendicular_amplitudes(scatterers, arm_field, selected);
    Eigen::Index first = 0;
    for (std::size_t i = 0; i < lines.size(); ++i) {
      const Eigen::Index rows = 6 * static_cast<Eigen::Index>(counts[i]);
      if (rows > 0) sums[i] += gram(B, first, rows, 2);  // Q and −Q
      first += rows;
    }
  }
  std::vector<IntensityForm> forms;
  forms.reserve(lines.size());
  for (Eigen::MatrixXd& sum : sums) forms.emplace_back(std::move(sum));
  return forms;
}

std::vector<IntensityForm> reflection_forms(const MagneticScatterers& scatterers,
                                            const MomentField& field,
                                            std::span<const Reflection> reflections) {
  std::vector<IntensityForm> forms(reflections.size());
  for (std::size_t arm = 0; arm < field.arms.size(); ++arm) {
    std::vector<Reflection> selected;
    std::vector<std::size_t> origin;
    for (std::size_t i = 0; i < reflections.size(); ++i) {
      if (reflections[i].arm != arm) continue;
      selected.push_back(positive(reflections[i]));
      origin.push_back(i);
    }
    const Eigen::MatrixXd B = perpendicular_amplitudes(scatterers, field.arms[arm], selected);
    for (std::size_t i = 0; i < origin.size(); ++i)
      forms[origin[i]] = IntensityForm(gram(B, 6 * static_cast<Eigen::Index>(i), 6, 1));
  }
  return forms;
}

}  // namespace spinsieve
