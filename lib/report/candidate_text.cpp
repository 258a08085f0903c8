#include "report/candidate_text.hpp"

#include <cmath>
#include <cstdint>
#include <numbers>
#include <optional>

#include "report/exact_text.hpp"

namespace spinsieve {
namespace {

constexpr double rounding = 1e-9;  // Of sums of a few exact terms of order one.

/// The fraction of least denominator that equals the value, if it is simple.
std::optional<Fraction> simple_fraction(double value, std::int64_t largest_denominator) {
  for (std::int64_t denominator = 1; denominator <= largest_denominator; ++denominator) {
    const double numerator = std::round(value * static_cast<double>(denominator));
    if (std::abs(value - numerator / static_cast<double>(denominator)) < rounding)
      return Fraction(static_cast<std::int64_t>(numerator), denominator);
  }
  return std::nullopt;
}

/// A positive factor before "u": nothing, "2", "0.866"; the divisor comes after the name.
std::string with_size(double size, const std::string& name) {
  const std::optional<Fraction> simple = simple_fraction(size, 12);
  if (!simple) return significant(size, 4) + name;
  std::string text = simple->numerator() == 1 ? name : std::to_string(simple->numerator()) + name;
  if (!simple->is_integer()) text += "/" + std::to_string(simple->denominator());
  return text;
}

}  // namespace

std::string factor_text(std::complex<double> factor, const std::string& name) {
  const double size = std::abs(factor);
  if (size < rounding) return {};
  if (std::abs(factor.imag()) < rounding)
    return (factor.real() < 0 ? "-" : "") + with_size(size, name);
  double turns = std::arg(factor) / (2 * std::numbers::pi);
  if (turns < 0) turns += 1;
  const std::optional<Fraction> phase = simple_fraction(turns, 1000);
  const std::string phase_text = phase ? to_string(*phase) : fixed(turns, 6);
  return with_size(size, "e(" + phase_text + ")" + name);
}

std::string moment_form(const FourierField& arm, std::size_t atom,
                        const std::vector<std::string>& parameters, PhaseSign sign) {
  std::string text = "(";
  for (std::size_t axis = 0; axis < 3; ++axis) {
    if (axis > 0) text += ',';
    std::string sum;
    for (std::size_t p = 0; p < parameters.size(); ++p) {
      const std::string term =
          factor_text(in_sign(arm.component(p, atom)[axis], sign), parameters[p]);
      if (term.empty()) continue;
      if (!sum.empty() && !term.starts_with('-')) sum += '+';
      sum += term;
    }
    text += sum.empty() ? "0" : sum;
  }
  return text + ")";
}

std::vector<std::string> irrep_labels(const Candidate& candidate,
                                      std::span<const WavevectorModes> wavevectors) {
  std::vector<std::string> labels;
  for (const CandidatePart& part : candidate.parts) {
    const std::vector<SmallIrrep>& irreps = wavevectors[part.wavevector].irreps;
    labels.push_back(irreps[part.irrep].label);
    if (part.partner && *part.partner != part.irrep) labels.push_back(irreps[*part.partner].label);
  }
  return labels;
}

std::string irreps_text(const Candidate& candidate, std::span<const WavevectorModes> wavevectors) {
  std::string text;
  for (const std::string& label : irrep_labels(candidate, wavevectors))
    text += (text.empty() ? "" : " + ") + label;
  return text;
}

std::string direction_text(const Candidate& candidate) {
  std::string text;
  for (const CandidatePart& part : candidate.parts)
    text += (text.empty() ? "" : "; ") + part.direction.text;
  return text;
}

BulkProperties candidate_bulk(const Candidate& candidate,
                              std::span<const WavevectorModes> wavevectors) {
  std::vector<PrimedRotation> operations;
  if (candidate.group) {
    operations = point_operations(candidate.group->operations());
  } else {
    // Half a period of the modulation undoes time reversal, so every operation also comes primed.
    std::vector<PrimedOperation> listed;
    for (const SuperspaceOperation& operation : candidate.superspace) {
      listed.push_back({operation.operation, false});
      listed.push_back({operation.operation, true});
    }
    operations = point_operations(listed);
  }
  std::vector<IntMatrix> parent;
  for (const Operation& operation : wavevectors.front().little_group.group().operations())
    parent.push_back(operation.rotation);
  return bulk_properties(MagneticPointGroup(operations), parent);
}

std::string superspace_text(const SuperspaceOperation& operation) {
  std::string text = to_string(operation.operation) + "; " + (operation.reversing ? "−θ" : "θ");
  if (!operation.phase.is_zero()) text += "+" + to_string(operation.phase);
  if (operation.primed) text += "; primed";
  return text;
}

}  // namespace spinsieve
