#pragma once

#include <cstddef>
#include <span>
#include <vector>

#include <Eigen/Core>

#include "scattering/measurement.hpp"
#include "scattering/profile.hpp"

namespace spinsieve {

/// A measured pattern: rising abscissa (see abscissa()), counts, standard deviations.
struct ObservedPattern {
  std::vector<double> x;
  std::vector<double> y;
  std::vector<double> sigma;
  Place place;
};

struct ExtractionOptions {
  double eta = 0;               ///< Lorentzian part of the pseudo-Voigt lines.
  int background_terms = 3;     ///< Chebyshev polynomials of the background, from the constant on.
  double merge_fraction = 0.2;  ///< Lines closer than this part of their width share an intensity.
};

/// Lines that share one intensity because the instrument cannot tell them apart.
struct ExtractedGroup {
  std::vector<std::size_t> lines;  ///< Into the positions given.
  double centre = 0;               ///< On the abscissa.
};

/// Areas of computed lines in an observed pattern, with everything they share in errors.
struct ExtractedIntensities {
  std::vector<ExtractedGroup> groups;
  Eigen::VectorXd intensity;            ///< Area, one a group; may come out negative.
  Eigen::MatrixXd covariance;           ///< From the sigma of the points, not scaled by χ².
  std::vector<std::size_t> unmeasured;  ///< Lines with fewer than 3 points within their width.
  double chi2 = 0;
  std::size_t degrees_of_freedom = 0;
  std::vector<double> background;  ///< At the points.
};

/// Weighted linear least squares of a pattern with one area per group of lines and a polynomial
/// background; positions and widths are kept.
///
/// q: positions of the computed lines in Å⁻¹, rising. Lines out of reach count as unmeasured.
/// Throws Error (at the pattern's place) unless the columns have equal lengths, x rises, all is
/// finite and every sigma is positive; when there are more unknowns than points; and when the fit
/// cannot tell two unknowns apart.
ExtractedIntensities extract_intensities(const Measurement& measurement,
                                         const ObservedPattern& pattern, std::span<const double> q,
                                         const ExtractionOptions& options = {});

}  // namespace spinsieve
