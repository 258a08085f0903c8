#include "scattering/polarised.hpp"

#include <cmath>

#include "scattering/constants.hpp"

namespace spinsieve {

PolarisedIntensities polarised_intensities(std::complex<double> nuclear,
                                           const ComplexVector3& F_perp, const Vector3& direction,
                                           double polarisation) {
  const double length = std::hypot(direction[0], direction[1], direction[2]);
  std::complex<double> along;
  for (std::size_t i = 0; i < 3; ++i) along += F_perp[i] * direction[i] / length;
  const double both =
      std::norm(nuclear) + magnetic_length_fm * magnetic_length_fm * squared_length(F_perp);
  const double interference =
      2 * polarisation * magnetic_length_fm * std::real(std::conj(nuclear) * along);
  return {both + interference, both - interference};
}

}  // namespace spinsieve
