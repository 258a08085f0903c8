#include "ranking/moments.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

#include <Eigen/Dense>

namespace spinsieve {

namespace {

using Component = FourierField::Component;

/// Inner products of the unit vectors along a, b, c.
Matrix3 unit_metric(const Cell& cell) {
  Matrix3 result = cell.metric();
  const Vector3 lengths{cell.a(), cell.b(), cell.c()};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) result[i][j] /= lengths[i] * lengths[j];
  return result;
}

/// Bilinear, without conjugation.
std::complex<double> product(const Matrix3& metric, const Component& a, const Component& b) {
  std::complex<double> sum = 0;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) sum += metric[i][j] * a[i] * b[j];
  return sum;
}

Component conjugate(const Component& a) {
  return {std::conj(a[0]), std::conj(a[1]), std::conj(a[2])};
}

Component component_at(const FourierField& arm, std::size_t parameters, std::size_t atom,
                       const Eigen::VectorXd& c) {
  Component sum{};
  for (std::size_t p = 0; p < parameters; ++p)
    for (std::size_t i = 0; i < 3; ++i)
      sum[i] += c[static_cast<Eigen::Index>(p)] * arm.component(p, atom)[i];
  return sum;
}

double magnitude(const Matrix3& metric, const Component& S, bool self_conjugate) {
  const double square = product(metric, S, conjugate(S)).real();
  if (self_conjugate) return std::sqrt(std::max(0.0, square));
  return std::sqrt(std::max(0.0, 2 * square + 2 * std::abs(product(metric, S, S))));
}

/// Central difference step relative to the largest parameter; the truncation error, its square, is
/// far below any standard error.
constexpr double difference_step = 1e-5;

/// d(value)/dc by central differences.
template <typename Value>
Eigen::VectorXd gradient(const Eigen::VectorXd& c, const Value& value) {
  const double step = difference_step * std::max(1e-12, c.cwiseAbs().maxCoeff());
  Eigen::VectorXd result(c.size());
  for (Eigen::Index p = 0; p < c.size(); ++p) {
    Eigen::VectorXd up = c;
    Eigen::VectorXd down = c;
    up[p] += step;
    down[p] -= step;
    result[p] = (value(up) - value(down)) / (2 * step);
  }
  return result;
}

/// cᵀ Q c = Re(turn · S_a · S_b)-type square of the vector Σ c_p v_p with real v_p.
Eigen::MatrixXd square_form(const Matrix3& metric, const std::vector<Component>& vectors) {
  const auto n = static_cast<Eigen::Index>(vectors.size());
  Eigen::MatrixXd Q(n, n);
  for (Eigen::Index p = 0; p < n; ++p)
    for (Eigen::Index q = 0; q < n; ++q)
      Q(p, q) = product(metric, vectors[static_cast<std::size_t>(p)],
                        vectors[static_cast<std::size_t>(q)])
                    .real();
  return Q;
}

/// Per parameter: the moment of an atom when its modulation stands at a phase (radians).
std::vector<Component> moments_at_phase(const FourierField& arm, std::size_t parameters,
                                        std::size_t atom, double phase) {
  std::vector<Component> result(parameters);
  const std::complex<double> turn = std::polar(1.0, phase);
  for (std::size_t p = 0; p < parameters; ++p)
    for (std::size_t i = 0; i < 3; ++i)
      result[p][i] = arm.self_conjugate ? arm.component(p, atom)[i].real()
                                        : 2 * (arm.component(p, atom)[i] * turn).real();
  return result;
}

/// cᵀ E c = Re or Im of S·S, or S·S*.
enum class Bilinear { norm, real_square, imaginary_square };

Eigen::MatrixXd bilinear_form(const Matrix3& metric, const FourierField& arm,
                              std::size_t parameters, std::size_t atom, Bilinear kind) {
  const auto n = static_cast<Eigen::Index>(parameters);
  Eigen::MatrixXd E(n, n);
  for (Eigen::Index p = 0; p < n; ++p)
    for (Eigen::Index q = 0; q < n; ++q) {
      const Component& a = arm.component(static_cast<std::size_t>(p), atom);
      const Component& b = arm.component(static_cast<std::size_t>(q), atom);
      const std::complex<double> value =
          product(metric, a, kind == Bilinear::norm ? conjugate(b) : b);
      E(p, q) = kind == Bilinear::imaginary_square ? value.imag() : value.real();
    }
  return (E + E.transpose()) / 2;
}

/// Below this part of the field a component counts as zero when a direction is put into words.
constexpr double word_tolerance = 1e-6;

bool in_plane(const Component& v, std::size_t missing, double scale) {
  return std::abs(v[missing]) <= word_tolerance * scale;
}

}  // namespace

std::vector<AtomMoment> atom_moments(const MomentField& field, const Cell& cell,
                                     const Eigen::VectorXd& c) {
  const Matrix3 metric = unit_metric(cell);
  std::vector<AtomMoment> result;
  for (std::size_t a = 0; a < field.arms.size(); ++a) {
    const FourierField& arm = field.arms[a];
    for (std::size_t j = 0; j < arm.atoms.size(); ++j) {
      AtomMoment atom;
      atom.arm = a;
      atom.site = arm.atoms[j].site;
      atom.position = arm.atoms[j].position;
      atom.self_conjugate = arm.self_conjugate;
      atom.moment = component_at(arm, field.parameters, j, c);
      atom.magnitude = magnitude(metric, atom.moment, arm.self_conjugate);
      result.push_back(std::move(atom));
    }
  }
  return result;
}

std::vector<AtomMoment> fitted_moments(const MomentField& field, const Cell& cell, const Fit& fit,
                                       ScaleMeaning meaning) {
  std::vector<AtomMoment> result = atom_moments(field, cell, fit.parameters);
  std::size_t largest = 0;
  for (std::size_t i = 0; i < result.size(); ++i)
    if (result[i].magnitude > result[largest].magnitude) largest = i;
  const double top = result.empty() ? 0 : result[largest].magnitude;
  const bool relative = meaning == ScaleMeaning::relative && top > 0;
  for (std::size_t i = 0; i < result.size(); ++i) {
    if (relative && i == largest) {
      result[i].sigma = 0;
    } else if (result[i].magnitude > word_tolerance * top) {
      const auto value = [&](const Eigen::VectorXd& c) {
        const std::vector<AtomMoment> moments = atom_moments(field, cell, c);
        return relative ? moments[i].magnitude / moments[largest].magnitude : moments[i].magnitude;
      };
      result[i].sigma = standard_error(fit, gradient(fit.parameters, value));
    }
  }
  if (relative)
    for (AtomMoment& atom : result) {
      atom.magnitude /= top;
      for (auto& component : atom.moment) component /= top;
    }
  return result;
}

std::vector<QuadraticLimit> moment_limits(const MomentField& field, const Cell& cell,
                                          std::size_t site, double limit, std::size_t phases) {
  const Matrix3 metric = unit_metric(cell);
  std::vector<QuadraticLimit> result;
  for (const FourierField& arm : field.arms)
    for (std::size_t j = 0; j < arm.atoms.size(); ++j) {
      if (arm.atoms[j].site != site) continue;
      const std::size_t steps = arm.self_conjugate ? 1 : phases;
      for (std::size_t s = 0; s < steps; ++s)
        result.push_back(
            {square_form(metric, moments_at_phase(arm, field.parameters, j,
                                                  std::numbers::pi * static_cast<double>(s) /
                                                      static_cast<double>(steps))),
             limit * limit});
    }
  return result;
}

std::vector<Eigen::MatrixXd> equal_moment_conditions(const MomentField& field, const Cell& cell) {
  const Matrix3 metric = unit_metric(cell);
  std::vector<Eigen::MatrixXd> result;
  const auto add = [&result](const Eigen::MatrixXd& E) {
    if (E.size() > 0 && E.cwiseAbs().maxCoeff() > word_tolerance) result.push_back(E);
  };
  for (const FourierField& arm : field.arms) {
    for (std::size_t j = 0; j < arm.atoms.size(); ++j) {
      if (!arm.self_conjugate) {
        add(bilinear_form(metric, arm, field.parameters, j, Bilinear::real_square));
        add(bilinear_form(metric, arm, field.parameters, j, Bilinear::imaginary_square));
      }
      std::size_t first = 0;
      while (arm.atoms[first].site != arm.atoms[j].site) ++first;
      if (first != j)
        add(bilinear_form(metric, arm, field.parameters, j, Bilinear::norm) -
            bilinear_form(metric, arm, field.parameters, first, Bilinear::norm));
    }
  }
  return result;
}

std::vector<std::string> undetermined_in_words(const MomentField& field, const Cell& cell,
                                               const Fit& fit,
                                               const std::vector<std::string>& parameters) {
  const Matrix3 metric = unit_metric(cell);
  std::vector<std::string> words;
  for (Eigen::Index d = 0; d < fit.undetermined.cols(); ++d) {
    const Eigen::VectorXd direction = fit.undetermined.col(d);
    bool turns = true;        // Every change is at right angles to its moment.
    bool phase_shift = true;  // Every change is i times its component.
    bool shared = false;
    double scale = 0;
    double ratio = 0;
    std::vector<Component> vectors;
    for (const FourierField& arm : field.arms) {
      for (std::size_t j = 0; j < arm.atoms.size(); ++j) {
        const Component m = component_at(arm, field.parameters, j, fit.parameters);
        const Component change = component_at(arm, field.parameters, j, direction);
        const double size = std::sqrt(product(metric, m, conjugate(m)).real());
        const double moved = std::sqrt(product(metric, change, conjugate(change)).real());
        scale = std::max({scale, size, moved});
        if (size > 0 && moved > 0) shared = true;
        const std::complex<double> overlap = product(metric, change, conjugate(m));
        if (std::abs(overlap.real()) > word_tolerance * std::max(size * moved, 1e-300))
          turns = false;
        vectors.push_back(m);
        vectors.push_back(change);
        if (arm.self_conjugate || size == 0) {
          phase_shift = phase_shift && !arm.self_conjugate && moved <= word_tolerance * scale;
          continue;
        }
        const double own = overlap.imag() / (size * size);
        if (ratio == 0) ratio = own;
        Component rest = change;
        for (std::size_t i = 0; i < 3; ++i) rest[i] -= std::complex<double>(0, own) * m[i];
        phase_shift = phase_shift && std::abs(own - ratio) <= word_tolerance &&
                      std::sqrt(product(metric, rest, conjugate(rest)).real()) <=
                          word_tolerance * std::max(size, moved);
      }
    }
    if (phase_shift && shared) {
      words.emplace_back("global phase of the modulation");
      continue;
    }
    if (turns && shared) {
      const std::array<const char*, 3> planes{"bc", "ac", "ab"};
      std::string plane;
      for (std::size_t missing = 0; missing < 3; ++missing)
        if (std::ranges::all_of(vectors,
                                [&](const Component& v) { return in_plane(v, missing, scale); }))
          plane = planes[missing];
      words.push_back(plane.empty() ? "moment direction"
                                    : "moment direction within the " + plane + " plane");
      continue;
    }
    std::string mixed;
    for (Eigen::Index p = 0; p < direction.size(); ++p)
      if (std::abs(direction[p]) > word_tolerance)
        mixed += (mixed.empty() ? "" : ", ") + parameters[static_cast<std::size_t>(p)];
    words.push_back((mixed.find(',') == std::string::npos ? "parameter " : "a combination of ") +
                    mixed);
  }
  return words;
}

}  // namespace spinsieve
