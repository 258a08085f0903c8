#include "report/exact_text.hpp"

namespace spinsieve {
namespace {

/// "1/2-1/2*u" becomes "-1/2+1/2*u".
std::string negated(std::string_view sum) {
  std::string result;
  if (!sum.starts_with('-') && !sum.starts_with('+')) result = "-";
  for (std::size_t i = 0; i < sum.size(); ++i) {
    if (sum[i] == '-') {
      if (i > 0) result += '+';
    } else {
      result += sum[i] == '+' ? '-' : sum[i];
    }
  }
  return result;
}

}  // namespace

std::string exact_text(Phase phase, const Cyclotomic& value) {
  if (value.is_zero()) return "0";
  if (Cyclotomic::holds(phase)) return to_string(Cyclotomic::root(phase) * value);
  if (const std::optional<Phase> own = value.phase()) return "e(" + to_string(phase + *own) + ")";
  const std::string factor = "e(" + to_string(phase) + ")";
  if (value.is_rational()) return to_string(value.rational()) + "*" + factor;
  return factor + "*(" + to_string(value) + ")";
}

std::string position_text(const FractionVector& position) {
  constexpr std::int64_t readable_denominator = 24;
  std::string text;
  for (const Fraction x : position)
    text +=
        (text.empty() ? "" : ", ") +
        (x.denominator() <= readable_denominator ? to_string(x) : significant(x.to_double(), 6));
  return text;
}

std::string conjugated(std::string_view exact) {
  std::string result;
  while (true) {
    const std::size_t start = exact.find("e(");
    if (start == std::string_view::npos) return result.append(exact);
    const std::size_t end = exact.find(')', start);
    result.append(exact.substr(0, start + 2));
    result += negated(exact.substr(start + 2, end - start - 2));
    exact.remove_prefix(end);
  }
}

std::complex<double> in_sign(std::complex<double> value, PhaseSign sign) {
  return sign == PhaseSign::plus ? value : std::conj(value);
}

std::string in_sign(const std::string& exact, PhaseSign sign) {
  return sign == PhaseSign::plus ? exact : conjugated(exact);
}

}  // namespace spinsieve
