#include "ranking/form_family.hpp"

#include <string>

#include "exact/error.hpp"

namespace spinsieve {

FormFamily::FormFamily(std::size_t parameters, const std::vector<Eigen::MatrixXd>& forms)
    : parameters_(static_cast<Eigen::Index>(parameters)),
      columns_(parameters_ * parameters_, static_cast<Eigen::Index>(forms.size())) {
  if (parameters == 0) throw Error("a candidate with 0 parameters; it needs at least one");
  for (std::size_t s = 0; s < forms.size(); ++s) {
    const Eigen::MatrixXd& M = forms[s];
    if (M.rows() != parameters_ || M.cols() != parameters_ || !M.allFinite())
      throw Error("intensity form " + std::to_string(s + 1) + " is " + std::to_string(M.rows()) +
                  " by " + std::to_string(M.cols()) + "; it must be finite and " +
                  std::to_string(parameters) + " by " + std::to_string(parameters));
    Eigen::Map<Eigen::MatrixXd>(columns_.col(static_cast<Eigen::Index>(s)).data(), parameters_,
                                parameters_) = 0.5 * (M + M.transpose());
  }
}

Eigen::VectorXd FormFamily::intensities(const Eigen::VectorXd& c) const {
  return 0.5 * jacobian(c) * c;
}

Eigen::MatrixXd FormFamily::jacobian(const Eigen::VectorXd& c) const {
  Eigen::MatrixXd result(size(), parameters_);
  for (Eigen::Index s = 0; s < size(); ++s) result.row(s).noalias() = 2 * (form(s) * c).transpose();
  return result;
}

FormFamily FormFamily::pulled_back(const Eigen::MatrixXd& V) const {
  FormFamily result;
  result.parameters_ = V.cols();
  result.columns_.resize(V.cols() * V.cols(), size());
  Eigen::MatrixXd half(parameters_, V.cols());
  for (Eigen::Index s = 0; s < size(); ++s) {
    half.noalias() = form(s) * V;
    Eigen::Map<Eigen::MatrixXd>(result.columns_.col(s).data(), V.cols(), V.cols()).noalias() =
        V.transpose() * half;
  }
  return result;
}

}  // namespace spinsieve
