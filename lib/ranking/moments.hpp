#pragma once

#include <array>
#include <complex>
#include <optional>
#include <string>
#include <vector>

#include "crystal/cell.hpp"
#include "modes/moment_field.hpp"
#include "ranking/fit.hpp"
#include "ranking/form_family.hpp"

namespace spinsieve {

/// Whether moments come in µB or only as ratios to the largest.
enum class ScaleMeaning { absolute, relative };

/// The Fourier component of one atom at given parameters.
struct AtomMoment {
  std::size_t arm = 0;  ///< Index into MomentField::arms.
  std::size_t site = 0;
  FractionVector position;
  bool self_conjugate = false;
  std::array<std::complex<double>, 3> moment{};  ///< µB along a/|a|, b/|b|, c/|c|.
  double magnitude = 0;  ///< The moment, or where it is modulated its largest value over all cells.
  std::optional<double> sigma;  ///< Of the magnitude; none where the data leave it open.
};

/// Moments of every atom of a field. The magnitude for a pair ±k follows from
/// |m|² = 2|S|² + 2|S·S| at the best phase.
std::vector<AtomMoment> atom_moments(const MomentField& field, const Cell& cell,
                                     const Eigen::VectorXd& c);

/// The same at a fit, with standard errors to first order. relative: magnitudes and errors are
/// ratios to the largest moment, which becomes 1 without error.
std::vector<AtomMoment> fitted_moments(const MomentField& field, const Cell& cell, const Fit& fit,
                                       ScaleMeaning meaning);

/// Squares of moments as forms: cᵀ Q c is the squared moment of one atom at one phase of its
/// modulation (one phase where 2k is a lattice vector). phases: how many are taken round a turn.
std::vector<QuadraticLimit> moment_limits(const MomentField& field, const Cell& cell,
                                          std::size_t site, double limit, std::size_t phases);

/// Conditions cᵀ E c = 0 that make all moments of each site equal in size, modulated ones included
/// (S·S = 0 and equal |S|).
std::vector<Eigen::MatrixXd> equal_moment_conditions(const MomentField& field, const Cell& cell);

/// What the data leave open about a fit, in words: "moment direction within the ab plane",
/// "global phase of the modulation", or the parameters that mix.
std::vector<std::string> undetermined_in_words(const MomentField& field, const Cell& cell,
                                               const Fit& fit,
                                               const std::vector<std::string>& parameters);

}  // namespace spinsieve
