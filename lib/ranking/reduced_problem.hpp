#pragma once

#include <optional>
#include <vector>

#include <Eigen/Dense>

#include "ranking/fit_data.hpp"
#include "ranking/form_family.hpp"

namespace spinsieve {

/// Rows (f·zᵀ A z − target)² of a χ² with unit weights; f is 1 or the factor of a scale slot.
struct FormRows {
  Eigen::MatrixXd packed;       ///< r² × R, each column one symmetric A.
  Eigen::VectorXd target;       ///< R.
  std::vector<int> slot;        ///< −1: no factor; else the scale slot.
  std::vector<char> one_sided;  ///< 1: counts only while f·zᵀ A z < target.

  Eigen::Index size() const noexcept { return target.size(); }
  Eigen::Map<const Eigen::MatrixXd> form(Eigen::Index row, Eigen::Index r) const {
    return {packed.col(row).data(), r, r};
  }
};

/// A scale that has to be found with the moments.
struct ScaleSlot {
  std::size_t group = 0;  ///< Of the data.
  bool measured = false;  ///< Then value ± sigma is one more residual.
  double value = 1;
  double sigma = 0;
};

/// The χ² of one candidate in its smallest equivalent form.
///
/// Parameters that no form contains are removed (c = V z), errors are whitened, fixed scales folded
/// in, and the two-sided rows of each scale compressed by an orthogonal transformation to at most
/// r(r+1)/2, the number of products z_i z_j, whatever the number of lines:
/// χ²(c) = rest + Σ rows(z) + Σ scale residuals, exactly.
class ReducedProblem {
 public:
  /// Throws Error when the forms do not match the points of the data.
  ReducedProblem(const FitData& data, const CandidateModel& model);

  Eigen::Index parameters() const noexcept { return basis_.cols(); }  ///< r, may be 0.
  const Eigen::MatrixXd& basis() const noexcept { return basis_; }    ///< V, n × r.

  /// Orthonormal n × (n − r): directions that change no intensity and no constraint.
  const Eigen::MatrixXd& unseen() const noexcept { return unseen_; }

  const FormRows& rows() const noexcept { return rows_; }
  const std::vector<ScaleSlot>& slots() const noexcept { return slots_; }
  double rest() const noexcept { return rest_; }

  /// Upper limits as zᵀ A z ≤ 1, then equalities zᵀ A z = 0; empty when there are none.
  const FormRows& constraints() const noexcept { return constraints_; }
  std::size_t limits() const noexcept { return limits_; }

 private:
  void find_basis(const CandidateModel& model);
  void add_rows(const FitData& data, const CandidateModel& model);
  void compress(const Eigen::MatrixXd& packed, const Eigen::VectorXd& target, int slot);
  void append(const Eigen::MatrixXd& packed, const Eigen::VectorXd& target, int slot,
              bool one_sided);

  Eigen::MatrixXd basis_;
  Eigen::MatrixXd unseen_;
  FormRows rows_;
  FormRows constraints_;
  std::size_t limits_ = 0;
  std::vector<ScaleSlot> slots_;
  double rest_ = 0;
};

/// The slot that each scale group of the data uses, or none when its factor is known or absorbed.
std::vector<std::optional<std::size_t>> scale_slots(const FitData& data);

}  // namespace spinsieve
