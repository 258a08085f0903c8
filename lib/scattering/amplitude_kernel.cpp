#include "scattering/amplitude_kernel.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <complex>
#include <numbers>
#include <vector>

#include "scattering/structure_factor.hpp"

// The kernel is compiled twice and the better version chosen when the program starts. The address
// sanitizer cannot run inside such a choice, so it gets the plain version alone.
#if defined(__x86_64__) && !defined(__SANITIZE_ADDRESS__)
#define SPINSIEVE_CLONES __attribute__((target_clones("fma", "default")))
#else
#define SPINSIEVE_CLONES
#endif

namespace spinsieve {
namespace {

constexpr std::size_t lanes = 8;  // reflections carried at a time
using Lane = double __attribute__((vector_size(lanes / 2 * sizeof(double))));

/// Numbers of eight reflections.
struct alignas(lanes / 2 * sizeof(double)) Eight {
  Lane low{};
  Lane high{};
};

/// One atom in one parameter: its Cartesian component, in µB, and where its phases are.
struct Term {
  std::array<double, 3> re;
  std::array<double, 3> im;
  std::size_t atom;
};

/// exp(2πi (h x + offset)) for h = first … last.
class PhaseRow {
 public:
  PhaseRow(double x, double offset_turns, int first, int last) : first_(first) {
    for (int h = first; h <= last; ++h)
      factors_.push_back(
          std::polar(1.0, 2 * std::numbers::pi * std::remainder(h * x + offset_turns, 1.0)));
  }
  const std::complex<double>& operator[](int h) const {
    return factors_[static_cast<std::size_t>(h - first_)];
  }

 private:
  int first_;
  std::vector<std::complex<double>> factors_;
};

/// Per atom: the rows of h (with the factor of the satellite in), k and l.
using AtomPhases = std::array<PhaseRow, 3>;

struct Amplitude {
  std::array<Eight, 3> re;
  std::array<Eight, 3> im;
};

/// Sum of component · phase over the terms of one parameter, for eight reflections.
SPINSIEVE_CLONES void sum_real_terms(const Term* terms, std::size_t count, const Eight* phase_re,
                                     const Eight* phase_im, Amplitude& out) {
  Amplitude sum{};
  for (std::size_t t = 0; t < count; ++t) {
    const Term& term = terms[t];
    const Eight& pr = phase_re[term.atom];
    const Eight& pi = phase_im[term.atom];
    for (std::size_t i = 0; i < 3; ++i) {
      sum.re[i].low += pr.low * term.re[i];
      sum.re[i].high += pr.high * term.re[i];
      sum.im[i].low += pi.low * term.re[i];
      sum.im[i].high += pi.high * term.re[i];
    }
  }
  out = sum;
}

SPINSIEVE_CLONES void sum_complex_terms(const Term* terms, std::size_t count, const Eight* phase_re,
                                        const Eight* phase_im, Amplitude& out) {
  Amplitude sum{};
  for (std::size_t t = 0; t < count; ++t) {
    const Term& term = terms[t];
    const Eight& pr = phase_re[term.atom];
    const Eight& pi = phase_im[term.atom];
    for (std::size_t i = 0; i < 3; ++i) {
      // One product a statement, so that each becomes a fused multiply-add.
      sum.re[i].low += pr.low * term.re[i];
      sum.re[i].high += pr.high * term.re[i];
      sum.im[i].low += pi.low * term.re[i];
      sum.im[i].high += pi.high * term.re[i];
      sum.re[i].low -= pi.low * term.im[i];
      sum.re[i].high -= pi.high * term.im[i];
      sum.im[i].low += pr.low * term.im[i];
      sum.im[i].high += pr.high * term.im[i];
    }
  }
  out = sum;
}

void set_lane(Eight& eight, std::size_t lane, double value) {
  if (lane < lanes / 2) {
    eight.low[lane] = value;
  } else {
    eight.high[lane - lanes / 2] = value;
  }
}

double lane_of(const Eight& eight, std::size_t lane) {
  return lane < lanes / 2 ? eight.low[lane] : eight.high[lane - lanes / 2];
}

/// Non-zero components of each parameter, conjugated where the satellite carries S*.
std::vector<std::vector<Term>> parameter_terms(const MagneticScatterers& scatterers,
                                               const FourierField& field, bool conjugate,
                                               std::size_t parameters) {
  const double primitive_cells = static_cast<double>(scatterers.group().centrings().size());
  std::vector<std::vector<Term>> terms(parameters);
  for (std::size_t p = 0; p < parameters; ++p) {
    for (std::size_t j = 0; j < field.atoms.size(); ++j) {
      Vector3 real{};
      Vector3 imaginary{};
      bool zero = true;
      for (std::size_t i = 0; i < 3; ++i) {
        const std::complex<double> S = field.component(p, j)[i];
        real[i] = primitive_cells * S.real();
        imaginary[i] = primitive_cells * (conjugate ? -S.imag() : S.imag());
        zero = zero && S == 0.0;
      }
      if (zero) continue;
      terms[p].push_back({scatterers.cell().cartesian_from_crystal_axes(real),
                          scatterers.cell().cartesian_from_crystal_axes(imaginary), j});
    }
  }
  return terms;
}

std::vector<AtomPhases> atom_phases(const FourierField& field,
                                    std::span<const Reflection> reflections) {
  std::array<int, 3> first = reflections.front().hkl;
  std::array<int, 3> last = first;
  for (const Reflection& reflection : reflections) {
    for (std::size_t i = 0; i < 3; ++i) {
      first[i] = std::min(first[i], reflection.hkl[i]);
      last[i] = std::max(last[i], reflection.hkl[i]);
    }
  }
  const int k_sign = reflections.front().k_sign;
  std::vector<AtomPhases> phases;
  phases.reserve(field.atoms.size());
  for (const FieldAtom& atom : field.atoms) {
    const Vector3 r = to_double(atom.position);
    const Vector3 k = to_double(field.k);
    const double turns = k_sign * (k[0] * r[0] + k[1] * r[1] + k[2] * r[2]);
    phases.push_back({PhaseRow(r[0], turns, first[0], last[0]),
                      PhaseRow(r[1], 0, first[1], last[1]), PhaseRow(r[2], 0, first[2], last[2])});
  }
  return phases;
}

/// Phase times weight of every atom, for up to eight reflections at a time.
class PhaseBlock {
 public:
  PhaseBlock(const MagneticScatterers& scatterers, const FourierField& field,
             std::span<const Reflection> reflections)
      : re(field.atoms.size()),
        im(field.atoms.size()),
        scatterers_(scatterers),
        field_(field),
        phases_(atom_phases(field, reflections)),
        weights_(scatterers.kinds()),
        lane_weights_(scatterers.kinds()) {
    for (const FieldAtom& atom : field.atoms)
      displacements_.push_back(scatterers.displacement(atom));
  }

  void fill(std::span<const Reflection> block) {
    for (std::size_t lane = 0; lane < block.size(); ++lane) {
      // Reflections of one line follow one another, so weights are evaluated once a line.
      const double q = block[lane].q_length;
      if (std::abs(q - weight_q_) > same_q_tolerance * q) {
        weight_q_ = q;
        for (std::size_t kind = 0; kind < weights_.size(); ++kind)
          weights_[kind] = scatterers_.kind_weight(kind, q);
      }
      for (std::size_t kind = 0; kind < weights_.size(); ++kind)
        lane_weights_[kind][lane] = weights_[kind];
    }
    for (std::size_t j = 0; j < phases_.size(); ++j) {
      const AtomPhases& rows = phases_[j];
      const std::size_t site = field_.atoms[j].site;
      const double occupancy = scatterers_.occupancy(site);
      const bool anisotropic = scatterers_.anisotropic(site);
      const std::array<double, lanes>& lane_weights = lane_weights_[scatterers_.kind(site)];
      for (std::size_t lane = 0; lane < block.size(); ++lane) {
        const Reflection& reflection = block[lane];
        const std::complex<double>& x = rows[0][reflection.hkl[0]];
        const std::complex<double>& y = rows[1][reflection.hkl[1]];
        const std::complex<double>& z = rows[2][reflection.hkl[2]];
        double weight = occupancy * lane_weights[lane];
        if (anisotropic)
          weight *=
              displacements_[j].anisotropic_factor(reciprocal_components(reflection, field_.k));
        // Written out: the library's complex product guards against infinities at a cost.
        const double xy_re = x.real() * y.real() - x.imag() * y.imag();
        const double xy_im = x.real() * y.imag() + x.imag() * y.real();
        set_lane(re[j], lane, weight * (xy_re * z.real() - xy_im * z.imag()));
        set_lane(im[j], lane, weight * (xy_re * z.imag() + xy_im * z.real()));
      }
    }
  }

  std::vector<Eight> re;  ///< By atom.
  std::vector<Eight> im;

 private:
  const MagneticScatterers& scatterers_;
  const FourierField& field_;
  std::vector<AtomPhases> phases_;
  std::vector<DebyeWaller> displacements_;
  std::vector<double> weights_;
  std::vector<std::array<double, lanes>> lane_weights_;
  double weight_q_ = -1;
};

/// F − e (e·F) of one lane, as six rows.
std::array<double, 6> perpendicular_rows(const Amplitude& F, std::size_t lane, const Vector3& q) {
  const double inverse_q2 = 1 / (q[0] * q[0] + q[1] * q[1] + q[2] * q[2]);
  std::array<double, 6> rows{};
  double along_re = 0;
  double along_im = 0;
  for (std::size_t i = 0; i < 3; ++i) {
    rows[i] = lane_of(F.re[i], lane);
    rows[i + 3] = lane_of(F.im[i], lane);
    along_re += rows[i] * q[i];
    along_im += rows[i + 3] * q[i];
  }
  for (std::size_t i = 0; i < 3; ++i) {
    rows[i] -= along_re * inverse_q2 * q[i];
    rows[i + 3] -= along_im * inverse_q2 * q[i];
  }
  return rows;
}

}  // namespace

Eigen::MatrixXd perpendicular_amplitudes(const MagneticScatterers& scatterers,
                                         const FourierField& field,
                                         std::span<const Reflection> reflections) {
  const std::size_t parameters =
      field.atoms.empty() ? 0 : field.components.size() / field.atoms.size();
  Eigen::MatrixXd result(6 * static_cast<Eigen::Index>(reflections.size()),
                         static_cast<Eigen::Index>(parameters));
  if (reflections.empty() || parameters == 0) return result;
  const bool conjugate = reflections.front().k_sign > 0 && !field.self_conjugate;
  const std::vector<std::vector<Term>> terms =
      parameter_terms(scatterers, field, conjugate, parameters);
  const bool real =
      std::ranges::all_of(field.components, [](const FourierField::Component& component) {
        return std::ranges::all_of(component,
                                   [](const std::complex<double>& S) { return S.imag() == 0; });
      });
  PhaseBlock phases(scatterers, field, reflections);
  Amplitude F;
  for (std::size_t first = 0; first < reflections.size(); first += lanes) {
    const std::span<const Reflection> block =
        reflections.subspan(first, std::min(lanes, reflections.size() - first));
    phases.fill(block);
    for (std::size_t p = 0; p < parameters; ++p) {
      (real ? sum_real_terms : sum_complex_terms)(terms[p].data(), terms[p].size(),
                                                  phases.re.data(), phases.im.data(), F);
      for (std::size_t lane = 0; lane < block.size(); ++lane) {
        const std::array<double, 6> rows = perpendicular_rows(F, lane, block[lane].q);
        const Eigen::Index row = 6 * static_cast<Eigen::Index>(first + lane);
        for (std::size_t i = 0; i < 6; ++i)
          result(row + static_cast<Eigen::Index>(i), static_cast<Eigen::Index>(p)) = rows[i];
      }
    }
  }
  return result;
}

}  // namespace spinsieve
