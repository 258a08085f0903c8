#include "search/line_fit.hpp"

#include <algorithm>
#include <cmath>

#include <Eigen/Dense>

namespace spinsieve {

namespace {

constexpr double same = 1 + 1e-9;  // a deviation equal to its tolerance counts as within

// Which lengths the holohedry exchanges: b follows a, c follows a or b.
std::array<std::size_t, 3> tied_lengths(const ReciprocalSpace& space) {
  std::array<std::size_t, 3> leader = {0, 1, 2};
  for (const IntMatrix& R : space.rotations())
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < i; ++j) {
        // Column j of R is the image of the basis vector j.
        bool carries = true;
        for (std::size_t row = 0; row < 3; ++row)
          carries = carries && (row == i) == (R[row][j] == 1 || R[row][j] == -1);
        if (carries) leader[i] = std::min(leader[i], leader[j]);
      }
  return leader;
}

// More matched lines first, then the smaller deviation in tolerances.
bool better(const LineFit& a, const LineFit& b) {
  if (a.missing != b.missing) return a.missing < b.missing;
  if (a.matched != b.matched) return a.matched > b.matched;
  return a.rms_in_tolerances < b.rms_in_tolerances;
}

}  // namespace

LineFitter::LineFitter(const SearchZone& zone, const ReciprocalSpace& space,
                       std::span<const Satellite> satellites, std::span<const FitLine> lines,
                       double length_tolerance)
    : zone_(zone), satellites_(satellites), lines_(lines), cell_tolerance_(length_tolerance) {
  for (std::size_t i = 0; i < 3; ++i) {
    basis_[i] = zone.to_frame(space.basis()[i]);
    // Row i: the components of the i-th frame axis.
    basis_inverse_[i] = space.components(zone.axes[i]);
  }
  if (length_tolerance > 0) {
    const std::array<std::size_t, 3> leader = tied_lengths(space);
    for (std::size_t i = 0; i < 3; ++i)
      strain_index_[i] = leader[i] == i ? strains_++ : strain_index_[leader[i]];
  }
  shifts_ = std::ranges::any_of(lines, [](const FitLine& line) { return line.shift != 0; });
}

Vector3 LineFitter::vector_of(const Satellite& satellite, const Vector3& x,
                              const Vector3& strain) const {
  const Vector3 v = satellite.start + satellite.factor * x;
  if (strains_ == 0) return v;
  Vector3 strained{};
  for (std::size_t i = 0; i < 3; ++i) {
    const double component =
        v[0] * basis_inverse_[0][i] + v[1] * basis_inverse_[1][i] + v[2] * basis_inverse_[2][i];
    strained = strained + (component / (1 + strain[i])) * basis_[i];
  }
  return strained;
}

std::vector<double> LineFitter::lengths(const Vector3& x, const SharedErrors& errors) const {
  std::vector<double> result;
  result.reserve(satellites_.size());
  for (const Satellite& satellite : satellites_)
    result.push_back(norm(vector_of(satellite, x, errors.strain)));
  return result;
}

std::vector<LineFitter::Nearest> LineFitter::nearest(const Vector3& x,
                                                     const SharedErrors& errors) const {
  const std::vector<double> all = lengths(x, errors);
  std::vector<Nearest> result(lines_.size());
  for (std::size_t i = 0; i < lines_.size(); ++i) {
    const double q = lines_[i].q + errors.zero_shift * lines_[i].shift;
    double least = -1;
    for (std::size_t s = 0; s < all.size(); ++s) {
      const double distance = std::abs(all[s] - q);
      if (least >= 0 && distance >= least) continue;
      least = distance;
      result[i] = {s, all[s] - q};
    }
  }
  return result;
}

LineFit LineFitter::at(const Vector3& x, const SharedErrors& errors) const {
  LineFit fit;
  fit.x = x;
  fit.errors = errors;
  fit.deviations.resize(lines_.size());
  const std::vector<Nearest> found = nearest(x, errors);
  double sum = 0;
  double scaled = 0;
  for (std::size_t i = 0; i < lines_.size(); ++i) {
    const double deviation = found[i].deviation;
    if (std::abs(deviation) > lines_[i].tolerance * same) {
      if (lines_[i].required) ++fit.missing;
      continue;
    }
    ++fit.matched;
    fit.deviations[i] = deviation;
    sum += deviation * deviation;
    scaled += deviation * deviation / (lines_[i].tolerance * lines_[i].tolerance);
  }
  if (fit.matched > 0) {
    fit.rms_q = std::sqrt(sum / static_cast<double>(fit.matched));
    fit.rms_in_tolerances = std::sqrt(scaled / static_cast<double>(fit.matched));
  }
  return fit;
}

std::vector<double> LineFitter::derivatives(const Satellite& satellite, const Vector3& x,
                                            const FitLine& line, const SharedErrors& errors) const {
  const Vector3 v = vector_of(satellite, x, errors.strain);
  const double length = std::max(norm(v), 1e-12);
  std::vector<double> row;
  for (std::size_t i = 0; i < zone_.dimension; ++i) row.push_back(satellite.factor * v[i] / length);
  if (shifts_) row.push_back(-line.shift);
  if (strains_ > 0) {
    std::vector<double> by_strain(strains_);
    for (std::size_t i = 0; i < 3; ++i) {
      const double component =
          v[0] * basis_inverse_[0][i] + v[1] * basis_inverse_[1][i] + v[2] * basis_inverse_[2][i];
      by_strain[strain_index_[i]] -= component * dot(v, basis_[i]) / length;
    }
    row.insert(row.end(), by_strain.begin(), by_strain.end());
  }
  return row;
}

void LineFitter::improve(LineFit& best, double power) const {
  constexpr int most_steps = 12;
  const std::size_t n = zone_.dimension + (shifts_ ? 1 : 0) + strains_;
  const auto size = static_cast<Eigen::Index>(n);
  LineFit current = best;
  for (int step = 0; step < most_steps; ++step) {
    const std::vector<Nearest> found = nearest(current.x, current.errors);
    Eigen::MatrixXd normal = Eigen::MatrixXd::Zero(size, size);
    Eigen::VectorXd gradient = Eigen::VectorXd::Zero(size);
    for (std::size_t i = 0; i < lines_.size(); ++i) {
      const double ratio = std::abs(found[i].deviation) / lines_[i].tolerance;
      if (ratio > (lines_[i].required ? 4 : 1)) continue;
      const std::vector<double> row =
          derivatives(satellites_[found[i].satellite], current.x, lines_[i], current.errors);
      const Eigen::Map<const Eigen::VectorXd> derivative(row.data(), size);
      const double weight =
          std::pow(ratio + 0.1, power - 2) / (lines_[i].tolerance * lines_[i].tolerance);
      normal += weight * derivative * derivative.transpose();
      gradient -= weight * found[i].deviation * derivative;
    }
    // The bounds of the shared errors act as a weak pull to zero, and undetermined directions stay.
    for (std::size_t p = zone_.dimension; p < n; ++p) {
      const auto index = static_cast<Eigen::Index>(p);
      const bool is_shift = shifts_ && p == zone_.dimension;
      const double bound = is_shift ? 1 : cell_tolerance_;
      std::size_t axis = 0;
      if (!is_shift)
        while (strain_index_[axis] != p - zone_.dimension - (shifts_ ? 1 : 0)) ++axis;
      const double value = is_shift ? current.errors.zero_shift : current.errors.strain[axis];
      normal(index, index) += 0.01 / (bound * bound);
      gradient(index) -= 0.01 * value / (bound * bound);
    }
    normal.diagonal() *= 1 + 1e-9;
    normal.diagonal().array() += 1e-9 * normal.diagonal().maxCoeff() + 1e-300;
    const Eigen::VectorXd change = normal.ldlt().solve(gradient);
    if (!change.allFinite()) return;
    Vector3 x = current.x;
    for (std::size_t i = 0; i < zone_.dimension; ++i) x[i] += change(static_cast<Eigen::Index>(i));
    SharedErrors errors = current.errors;
    std::size_t p = zone_.dimension;
    if (shifts_)
      errors.zero_shift =
          std::clamp(errors.zero_shift + change(static_cast<Eigen::Index>(p++)), -1.0, 1.0);
    if (strains_ > 0)
      for (std::size_t i = 0; i < 3; ++i)
        errors.strain[i] =
            std::clamp(errors.strain[i] + change(static_cast<Eigen::Index>(p + strain_index_[i])),
                       -cell_tolerance_, cell_tolerance_);
    const double moved = norm(x - current.x) +
                         std::abs(errors.zero_shift - current.errors.zero_shift) +
                         norm(errors.strain - current.errors.strain);
    current = at(x, errors);
    if (better(current, best)) best = current;
    if (moved < 1e-9) return;
  }
}

LineFit LineFitter::fit(const Vector3& start) const {
  LineFit best = at(start, {});
  if (zone_.dimension == 0 && !shifts_ && strains_ == 0) return best;
  improve(best, 2);
  // High powers approach the least largest deviation, for points in a corner of the tolerance.
  if (best.missing > 0) improve(best, 8);
  return best;
}

double LineFitter::resolution_volume(const LineFit& fit) const {
  const std::size_t d = zone_.dimension;
  if (d == 0) return 1;
  const auto size = static_cast<Eigen::Index>(d);
  const std::vector<Nearest> found = nearest(fit.x, fit.errors);
  Eigen::MatrixXd normal = Eigen::MatrixXd::Zero(size, size);
  for (std::size_t i = 0; i < lines_.size(); ++i) {
    if (!fit.deviations[i].has_value()) continue;
    const std::vector<double> row =
        derivatives(satellites_[found[i].satellite], fit.x, lines_[i], fit.errors);
    const Eigen::Map<const Eigen::VectorXd> derivative(row.data(), size);
    normal += derivative * derivative.transpose() / (lines_[i].tolerance * lines_[i].tolerance);
  }
  const double determinant = normal.determinant();
  // The ellipsoid of mean square deviation 1/3, that of an even spread within the tolerance.
  const double scale = std::pow(static_cast<double>(fit.matched) / 3, static_cast<double>(d) / 2);
  constexpr std::array<double, 4> unit_ball = {1, 2, 3.141592653589793, 4.1887902047863905};
  return scale * unit_ball[d] / std::sqrt(std::max(determinant, 1e-300));
}

}  // namespace spinsieve
