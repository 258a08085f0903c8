#include "arrangement/exact_field.hpp"

#include <cmath>

namespace spinsieve {

namespace {

/// Whether an entry of the sum vanishes is decided on exact terms when there is one; for several
/// terms of different phases the value is compared with their rounding error.
constexpr double sum_rounding = 1e-12;

/// What one unit of a parameter is in the units of its exact field: the size of its first non-zero
/// crystal-axis component.
double parameter_unit(const ExactField& field, std::size_t parameter,
                      const std::array<double, 3>& lengths) {
  for (const ExactArm& arm : field.arms)
    for (std::size_t j = 0; j < arm.atoms.size(); ++j) {
      const auto moment = value(arm.components[parameter * arm.atoms.size() + j]);
      for (std::size_t i = 0; i < 3; ++i) {
        const double size = arm.self_conjugate ? std::abs(moment[i].real()) : std::abs(moment[i]);
        if (size > sum_rounding) return size * lengths[i];
      }
    }
  return 1;
}

}  // namespace

std::array<std::complex<double>, 3> value(const ExactComponent& component) {
  std::array<std::complex<double>, 3> sum{};
  for (const ExactTerm& term : component) {
    const std::complex<double> factor = term.phase.factor();
    for (std::size_t i = 0; i < 3; ++i)
      if (!term.moment[i].is_zero()) sum[i] += factor * term.moment[i].to_complex();
  }
  for (std::complex<double>& s : sum) {
    if (std::abs(s.real()) < sum_rounding) s = {0, s.imag()};
    if (std::abs(s.imag()) < sum_rounding) s = {s.real(), 0};
  }
  return sum;
}

MomentField to_moment_field(const ExactField& field, const Cell& cell) {
  const std::array<double, 3> lengths{cell.a(), cell.b(), cell.c()};
  MomentField result;
  result.parameters = field.parameters;
  std::vector<double> unit;
  for (std::size_t p = 0; p < field.parameters; ++p)
    unit.push_back(parameter_unit(field, p, lengths));
  for (const ExactArm& arm : field.arms) {
    FourierField fourier;
    fourier.k = arm.k;
    fourier.self_conjugate = arm.self_conjugate;
    fourier.atoms = arm.atoms;
    for (std::size_t p = 0; p < field.parameters; ++p)
      for (std::size_t j = 0; j < arm.atoms.size(); ++j) {
        std::array<std::complex<double>, 3> moment =
            value(arm.components[p * arm.atoms.size() + j]);
        for (std::size_t i = 0; i < 3; ++i) {
          moment[i] *= lengths[i] / unit[p];
          if (arm.self_conjugate) moment[i] = {moment[i].real(), 0};
        }
        fourier.components.push_back(moment);
      }
    result.arms.push_back(std::move(fourier));
  }
  return result;
}

}  // namespace spinsieve
