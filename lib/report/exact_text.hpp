#pragma once

#include <complex>
#include <string>
#include <string_view>

#include "exact/cyclotomic.hpp"
#include "exact/fraction.hpp"
#include "exact/phase.hpp"
#include "report/conventions.hpp"

namespace spinsieve {

/// exp(2πi·phase) times the value, exact: "-1", "e(1/3)", "2*e(1/5)", "e(1/7)*(1+e(1/8))".
std::string exact_text(Phase phase, const Cyclotomic& value);

/// "3/4, 1/4, 0.1724": a position with decimals where a fraction says less (denominator above 24).
std::string position_text(const FractionVector& position);

/// The conjugate of an exact text: every e(x) becomes e(-x).
std::string conjugated(std::string_view exact);

/// The value, or its conjugate where the report is written for exp(−2πi k·L).
std::complex<double> in_sign(std::complex<double> value, PhaseSign sign);
std::string in_sign(const std::string& exact, PhaseSign sign);

}  // namespace spinsieve
