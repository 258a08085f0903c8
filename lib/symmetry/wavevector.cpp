#include "symmetry/wavevector.hpp"

#include <cctype>

#include "exact/error.hpp"

namespace spinsieve {

namespace {

constexpr std::string_view parameter_names = "uvw";

}  // namespace

int Wavevector::free_parameters() const {
  int count = 0;
  for (const FractionVector& row : along)
    if (row != FractionVector{}) ++count;
  return count;
}

Wavevector operator-(const Wavevector& a, const Wavevector& b) {
  Wavevector result(a.constant - b.constant);
  for (std::size_t p = 0; p < 3; ++p) result.along[p] = a.along[p] - b.along[p];
  return result;
}

Wavevector operator-(const Wavevector& a) { return Wavevector() - a; }

Wavevector operator+(const Wavevector& a, const FractionVector& K) {
  Wavevector result = a;
  result.constant = a.constant + K;
  return result;
}

Wavevector row_times(const Wavevector& k, const IntMatrix& R) {
  Wavevector result(row_times(k.constant, R));
  for (std::size_t p = 0; p < 3; ++p) result.along[p] = row_times(k.along[p], R);
  return result;
}

std::array<std::string, 3> component_texts(const Wavevector& k) {
  std::array<std::string, 3> texts;
  for (std::size_t i = 0; i < 3; ++i) {
    std::string& text = texts[i];
    for (std::size_t p = 0; p < 3; ++p) {
      const Fraction factor = k.along[p][i];
      if (factor.is_zero()) continue;
      if (factor > Fraction(0) && !text.empty()) text += "+";
      if (factor == Fraction(-1))
        text += "-";
      else if (factor != Fraction(1))
        text += to_string(factor) + (factor.is_integer() ? "" : "*");
      text += parameter_names[p];
    }
    if (k.constant[i].is_zero() && !text.empty()) continue;
    if (!text.empty() && k.constant[i] > Fraction(0)) text += "+";
    text += to_string(k.constant[i]);
  }
  return texts;
}

std::string to_string(const Wavevector& k) {
  const std::array<std::string, 3> texts = component_texts(k);
  return texts[0] + ", " + texts[1] + ", " + texts[2];
}

void parse_component(std::string_view text, std::size_t i, Wavevector& k) {
  const std::string quoted = "'" + std::string(text) + "'";
  const auto bad = [&quoted] {
    return Error(quoted +
                 " is not a component of a wavevector; accepted are 1/2, 0.25, u, 1/2-u, 2u");
  };
  std::string compact;
  bool gap = false;  // A blank between two characters of one number joins nothing.
  const auto is_digit = [](char c) { return (c >= '0' && c <= '9') || c == '.'; };
  for (const char c : text) {
    if (c != ' ' && gap && !compact.empty() && is_digit(compact.back()) && is_digit(c)) throw bad();
    if (c != ' ') compact += c;
    gap = c == ' ';
  }
  if (compact.empty()) throw bad();
  std::size_t start = 0;
  while (start < compact.size()) {
    std::size_t end = start + 1;
    while (end < compact.size() &&
           ((compact[end] != '+' && compact[end] != '-') || std::tolower(compact[end - 1]) == 'e'))
      ++end;
    std::string term = compact.substr(start, end - start);
    start = end;
    const std::size_t name = parameter_names.find(term.back());
    if (name == std::string_view::npos) {
      Fraction number;
      try {
        number = parse_fraction(term);
      } catch (const Error& fault) {
        if (fault.message().find("zero denominator") != std::string::npos) throw;
        throw bad();
      }
      k.constant[i] += number;
      continue;
    }
    term.pop_back();
    if (!term.empty() && term.back() == '*') term.pop_back();
    if (term.empty() || term == "+" || term == "-") term += "1";
    try {
      k.along[name][i] += parse_fraction(term);
    } catch (const Error&) {
      throw bad();
    }
  }
}

}  // namespace spinsieve
