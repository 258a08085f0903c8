#include "scattering/extraction.hpp"

#include <algorithm>
#include <cmath>
#include <optional>
#include <string>

#include <Eigen/QR>

#include "scattering/geometry.hpp"

namespace spinsieve {
namespace {

void require_usable(const ObservedPattern& pattern) {
  const std::size_t n = pattern.x.size();
  if (pattern.y.size() != n || pattern.sigma.size() != n)
    throw Error(pattern.place,
                "columns of unequal length in a pattern; it needs position, "
                "intensity and sigma at every point");
  for (std::size_t i = 0; i < n; ++i) {
    const std::string point = "point " + std::to_string(i + 1) + " of a pattern";
    if (!std::isfinite(pattern.x[i]) || !std::isfinite(pattern.y[i]))
      throw Error(pattern.place, point + " is not a finite number");
    if (!std::isfinite(pattern.sigma[i]) || pattern.sigma[i] <= 0)
      throw Error(pattern.place, point + " has sigma " + std::to_string(pattern.sigma[i]) +
                                     "; it must be positive");
    if (i > 0 && pattern.x[i] <= pattern.x[i - 1])
      throw Error(pattern.place, point + " does not lie beyond the one before; positions rise");
  }
}

/// Chebyshev polynomial T_n on [−1, 1].
double chebyshev(int n, double t) {
  return std::cos(n * std::acos(std::min(1.0, std::max(-1.0, t))));
}

/// Groups of lines with enough points, by rising centre.
void group_lines(const Measurement& measurement, const ObservedPattern& pattern,
                 std::span<const double> q, const ExtractionOptions& options,
                 ExtractedIntensities& result, std::vector<PlacedLine>& placed) {
  placed.resize(q.size());
  const std::optional<double> reach = largest_q(measurement.geometry);
  std::optional<std::size_t> previous;
  for (std::size_t i = 0; i < q.size(); ++i) {
    if (reach && q[i] >= *reach) {
      result.unmeasured.push_back(i);
      continue;
    }
    placed[i] = placed_line(measurement, q[i]);
    const auto points = std::ranges::count_if(
        pattern.x, [&](double x) { return std::abs(x - placed[i].centre) <= placed[i].fwhm; });
    if (points < 3) {
      result.unmeasured.push_back(i);
      continue;
    }
    const bool unresolved = previous && std::abs(placed[i].centre - placed[*previous].centre) <
                                            options.merge_fraction * placed[i].fwhm;
    if (!unresolved) {
      result.groups.emplace_back();
      previous = i;  // Lines are compared with the first of a group, so that no chain forms.
    }
    result.groups.back().lines.push_back(i);
  }
  for (ExtractedGroup& group : result.groups) {
    for (const std::size_t line : group.lines) group.centre += placed[line].centre;
    group.centre /= static_cast<double>(group.lines.size());
  }
}

}  // namespace

ExtractedIntensities extract_intensities(const Measurement& measurement,
                                         const ObservedPattern& pattern, std::span<const double> q,
                                         const ExtractionOptions& options) {
  require_usable(pattern);
  ExtractedIntensities result;
  std::vector<PlacedLine> placed;
  group_lines(measurement, pattern, q, options, result, placed);
  const auto points = static_cast<Eigen::Index>(pattern.x.size());
  const auto areas = static_cast<Eigen::Index>(result.groups.size());
  const Eigen::Index unknowns = areas + options.background_terms;
  if (points <= unknowns)
    throw Error(pattern.place, std::to_string(points) + " points of a pattern for " +
                                   std::to_string(unknowns) + " unknowns; more points are needed");
  Eigen::MatrixXd design(points, unknowns);
  Eigen::VectorXd observed(points);
  const double first = pattern.x.front();
  const double span = pattern.x.back() - first;
  for (Eigen::Index i = 0; i < points; ++i) {
    const auto point = static_cast<std::size_t>(i);
    const double x = pattern.x[point];
    for (Eigen::Index g = 0; g < areas; ++g) {
      const ExtractedGroup& group = result.groups[static_cast<std::size_t>(g)];
      double sum = 0;
      for (const std::size_t line : group.lines)
        sum += pseudo_voigt(x, placed[line].centre, placed[line].fwhm, options.eta);
      design(i, g) = sum / static_cast<double>(group.lines.size());
    }
    for (int n = 0; n < options.background_terms; ++n)
      design(i, areas + n) = chebyshev(n, 2 * (x - first) / span - 1);
    design.row(i) /= pattern.sigma[point];
    observed(i) = pattern.y[point] / pattern.sigma[point];
  }
  // Unit columns make the rank test one of directions, whatever the units of the areas.
  const Eigen::VectorXd lengths = design.colwise().norm();
  const Eigen::MatrixXd scaled = design * lengths.cwiseInverse().asDiagonal();
  Eigen::ColPivHouseholderQR<Eigen::MatrixXd> qr(scaled);
  qr.setThreshold(1e-7);
  if (qr.rank() < unknowns)
    throw Error(pattern.place,
                "the pattern cannot tell some of its lines apart; merge lines that "
                "are closer, or take fewer background terms");
  const Eigen::VectorXd solution = lengths.cwiseInverse().asDiagonal() * qr.solve(observed);
  const Eigen::MatrixXd inverse_r = qr.matrixR()
                                        .topLeftCorner(unknowns, unknowns)
                                        .triangularView<Eigen::Upper>()
                                        .solve(Eigen::MatrixXd::Identity(unknowns, unknowns));
  const Eigen::MatrixXd half =
      lengths.cwiseInverse().asDiagonal() * (qr.colsPermutation() * inverse_r);
  const Eigen::MatrixXd covariance = half * half.transpose();
  result.intensity = solution.head(areas);
  result.covariance = covariance.topLeftCorner(areas, areas);
  result.chi2 = (design * solution - observed).squaredNorm();
  result.degrees_of_freedom = static_cast<std::size_t>(points - unknowns);
  const Eigen::VectorXd background =
      design.rightCols(options.background_terms) * solution.tail(options.background_terms);
  for (Eigen::Index i = 0; i < points; ++i)
    result.background.push_back(background(i) * pattern.sigma[static_cast<std::size_t>(i)]);
  return result;
}

}  // namespace spinsieve
