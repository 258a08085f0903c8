#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <span>
#include <vector>

#include <Eigen/Dense>

#include "ranking/fit_data.hpp"
#include "ranking/form_family.hpp"

namespace spinsieve {

/// How the sets of intensities that two candidates can reach over the points of the data relate.
enum class TieRelation { none, equal, first_within_second, second_within_first };

/// What a relation rests on.
enum class TieProof {
  proved,  ///< A linear map between the parameters carries the forms into one another.
  tested   ///< Mutual global fits at random points.
};

struct Tie {
  TieRelation relation = TieRelation::none;
  TieProof proof = TieProof::tested;
  /// Proved: L with scale_s · Lᵀ M″_s L = M′_s, so that c″ = L c′ gives equal intensities; from the
  /// contained candidate to the other, from the first to the second when they are equal.
  Eigen::MatrixXd map;
};

struct TieOptions {
  std::uint64_t seed = 1;
  std::size_t points = 24;                 ///< Random parameter vectors of each candidate.
  std::vector<Eigen::MatrixXd> suggested;  ///< Maps from first to second to try: n₂ × n₁.
};

/// Forms agree when they differ by less than this part of the largest of all: they are rounded to
/// 1e-12 or so, and no measurement tells 1e-8.
constexpr double map_tolerance = 1e-8;

/// A tested tie: every intensity of one is met by the other to this relative deviation.
constexpr double tested_tolerance = 1e-5;

/// Whether L carries the forms of `to` into those of `from`: Lᵀ M_to L = M_from up to one positive
/// factor per free scale beyond the absorbed one, to map_tolerance.
bool carries(const FitData& data, const FormFamily& from, const FormFamily& to,
             const Eigen::MatrixXd& L);

/// An invertible map (on the seen directions) that carries one family into the other, if any.
///
/// With A = Σ w_s M_s made the unit matrix on both sides by c = A^(−1/2) z, such a map is
/// orthogonal and intertwines the forms: U N′_s = N″_s U, a linear system. The polar factor of a
/// random invertible solution is a solution, since the solutions with their transposes close under
/// products; hence the search is complete, degenerate cases such as a free direction in a plane
/// included.
std::optional<Eigen::MatrixXd> linear_map(const FitData& data, const FormFamily& from,
                                          const FormFamily& to);

/// Relation between two candidates over the points of the data.
///
/// Equality is proved by linear_map, containment by the suggested maps or one found by least
/// squares when n₁n₂ ≤ 12; else tested. Candidates with equalities are only tested; limits do not
/// enter.
Tie tie(const FitData& data, const CandidateModel& first, const CandidateModel& second,
        const TieOptions& options = {});

}  // namespace spinsieve
