#pragma once

#include <array>
#include <optional>
#include <span>
#include <vector>

#include "crystal/operation.hpp"

namespace spinsieve {

using FractionMatrix = std::array<FractionVector, 3>;  ///< [row][column], exact.

FractionMatrix to_fractions(const IntMatrix& R);
std::optional<IntMatrix> to_integers(const FractionMatrix& A);  ///< None unless all are integers.
FractionMatrix transpose(const FractionMatrix& A);
FractionMatrix product(const FractionMatrix& A, const FractionMatrix& B);
Fraction determinant(const FractionMatrix& A);
/// Throws Error when the determinant is 0.
FractionMatrix inverse(const FractionMatrix& A);
FractionVector times(const FractionMatrix& A, const FractionVector& column);

/// Reduced row echelon form without zero rows.
std::vector<FractionVector> row_echelon(std::vector<FractionVector> rows);

/// Canonical basis of all x with row · x = 0 for every row.
std::vector<FractionVector> null_space(const std::vector<FractionVector>& rows);

/// One x with rows[i] · x = right[i] for all i, free components 0; none when they contradict.
std::optional<FractionVector> solution(std::span<const FractionVector> rows,
                                       std::span<const Fraction> right);

}  // namespace spinsieve
