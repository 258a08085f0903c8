#pragma once

#include <array>
#include <cstddef>
#include <limits>
#include <optional>
#include <span>
#include <vector>

#include "search/branch_and_bound.hpp"
#include "search/reciprocal_space.hpp"
#include "search/search_zone.hpp"

namespace spinsieve {

/// One observed position with what may be wrong with it, Å⁻¹.
struct FitLine {
  double q = 0;
  double tolerance = 0;  ///< Half width within which a predicted line explains it.
  double shift = 0;      ///< What the largest allowed zero shift adds to q.
  bool required = true;  ///< False for a line that may be an impurity.
};

/// Errors shared by all lines, within their bounds.
struct SharedErrors {
  double zero_shift = 0;  ///< Fraction of the allowed zero shift, −1 … 1.
  Vector3 strain{};       ///< Relative change of a, b, c.
};

/// A point of a zone adjusted to the lines.
struct LineFit {
  Vector3 x{};
  SharedErrors errors;
  std::vector<std::optional<double>> deviations;  ///< Predicted − observed, Å⁻¹; absent: unmatched.
  std::size_t matched = 0;                        ///< Lines within tolerance, of all.
  std::size_t missing = 0;                        ///< Required lines without a match.
  double rms_q = 0;                               ///< Of the matched lines, Å⁻¹.
  double rms_in_tolerances = 0;                   ///< The same in units of each line's tolerance.
};

/// Least squares of line positions over the free components of k and the shared errors.
class LineFitter {
 public:
  /// length_tolerance: bound on each relative length error; lengths that the holohedry exchanges
  /// share theirs. All referenced objects must outlive the fitter.
  LineFitter(const SearchZone& zone, const ReciprocalSpace& space,
             std::span<const Satellite> satellites, std::span<const FitLine> lines,
             double length_tolerance);

  /// The best fit met on the way from a start: most matched lines, then least deviation.
  LineFit fit(const Vector3& start) const;

  /// The lines matched at a point as it stands.
  LineFit at(const Vector3& x, const SharedErrors& errors) const;

  /// |Q| of every satellite at a point, Å⁻¹, in the order of the satellites.
  std::vector<double> lengths(const Vector3& x, const SharedErrors& errors) const;

  std::size_t parameters() const { return zone_.dimension; }
  std::span<const FitLine> lines() const { return lines_; }

  /// (Å⁻¹)^dimension: the size of the set of x that keeps the given matches, within the tolerances.
  double resolution_volume(const LineFit& fit) const;

 private:
  struct Nearest {
    std::size_t satellite = 0;
    double deviation = std::numeric_limits<double>::infinity();
  };
  Vector3 vector_of(const Satellite& satellite, const Vector3& x, const Vector3& strain) const;
  std::vector<Nearest> nearest(const Vector3& x, const SharedErrors& errors) const;
  std::vector<double> derivatives(const Satellite& satellite, const Vector3& x, const FitLine& line,
                                  const SharedErrors& errors) const;
  void improve(LineFit& best, double power) const;

  const SearchZone& zone_;
  std::span<const Satellite> satellites_;
  std::span<const FitLine> lines_;
  Matrix3 basis_{};          // rows 2π a*, 2π b*, 2π c* in the frame of the zone
  Matrix3 basis_inverse_{};  // components on them from frame coordinates
  std::array<std::size_t, 3> strain_index_{};  // which parameter each length follows
  std::size_t strains_ = 0;
  bool shifts_ = false;
  double cell_tolerance_ = 0;
};

}  // namespace spinsieve
