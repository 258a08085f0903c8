#include "crystal/operation.hpp"

#include <cctype>

#include "exact/error.hpp"

namespace spinsieve {

Operation operator*(const Operation& a, const Operation& b) {
  return {product(a.rotation, b.rotation), times(a.rotation, b.translation) + a.translation};
}

Operation Operation::inverse() const {
  const IntMatrix R = spinsieve::inverse(rotation);
  return {R, FractionVector{} - times(R, translation)};
}

FractionVector Operation::apply(const FractionVector& position) const {
  return times(rotation, position) + translation;
}

int determinant(const IntMatrix& R) {
  return R[0][0] * (R[1][1] * R[2][2] - R[1][2] * R[2][1]) -
         R[0][1] * (R[1][0] * R[2][2] - R[1][2] * R[2][0]) +
         R[0][2] * (R[1][0] * R[2][1] - R[1][1] * R[2][0]);
}

int trace(const IntMatrix& R) { return R[0][0] + R[1][1] + R[2][2]; }

IntMatrix product(const IntMatrix& A, const IntMatrix& B) {
  IntMatrix C;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      C[i][j] = A[i][0] * B[0][j] + A[i][1] * B[1][j] + A[i][2] * B[2][j];
  return C;
}

IntMatrix inverse(const IntMatrix& R) {
  const int sign = determinant(R);
  IntMatrix result;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) {
      // Cyclic indices make the cofactor signs come out by themselves.
      const std::size_t r = (j + 1) % 3;
      const std::size_t s = (j + 2) % 3;
      const std::size_t p = (i + 1) % 3;
      const std::size_t q = (i + 2) % 3;
      result[i][j] = sign * (R[r][p] * R[s][q] - R[r][q] * R[s][p]);
    }
  return result;
}

IntVector row_times(const IntVector& row, const IntMatrix& R) {
  IntVector result;
  for (std::size_t j = 0; j < 3; ++j)
    result[j] = row[0] * R[0][j] + row[1] * R[1][j] + row[2] * R[2][j];
  return result;
}

namespace {

/// Adds integer · value, without arithmetic for the integers 0 and ±1 that fill rotations.
void add_multiple(Fraction& sum, int integer, Fraction value) {
  if (integer == 0 || value.is_zero()) return;
  if (integer == 1)
    sum += value;
  else if (integer == -1)
    sum -= value;
  else
    sum += Fraction(integer) * value;
}

}  // namespace

FractionVector row_times(const FractionVector& row, const IntMatrix& R) {
  FractionVector result;
  for (std::size_t j = 0; j < 3; ++j)
    for (std::size_t i = 0; i < 3; ++i) add_multiple(result[j], R[i][j], row[i]);
  return result;
}

FractionVector times(const IntMatrix& R, const FractionVector& column) {
  FractionVector result;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) add_multiple(result[i], R[i][j], column[j]);
  return result;
}

FractionVector operator+(const FractionVector& a, const FractionVector& b) {
  return {a[0] + b[0], a[1] + b[1], a[2] + b[2]};
}

FractionVector operator-(const FractionVector& a, const FractionVector& b) {
  return {a[0] - b[0], a[1] - b[1], a[2] - b[2]};
}

FractionVector operator*(Fraction scale, const FractionVector& a) {
  return {scale * a[0], scale * a[1], scale * a[2]};
}

Fraction dot(const FractionVector& a, const FractionVector& b) {
  return a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
}

bool is_integer(const FractionVector& v) {
  return v[0].is_integer() && v[1].is_integer() && v[2].is_integer();
}

FractionVector modulo_one(const FractionVector& v) {
  return {v[0].modulo_one(), v[1].modulo_one(), v[2].modulo_one()};
}

std::string to_string(const Operation& operation) {
  std::string text;
  for (std::size_t i = 0; i < 3; ++i) {
    if (i > 0) text += ",";
    std::string part;
    for (std::size_t j = 0; j < 3; ++j) {
      const int factor = operation.rotation[i][j];
      if (factor == 0) continue;
      if (factor > 0 && !part.empty()) part += "+";
      if (factor < 0) part += "-";
      if (factor > 1 || factor < -1) part += std::to_string(factor < 0 ? -factor : factor);
      part += "xyz"[j];
    }
    const Fraction t = operation.translation[i];
    if (!t.is_zero()) {
      if (t > Fraction(0)) part += "+";
      part += to_string(t);
    }
    text += part;
  }
  return text;
}

std::string to_string(const FractionVector& v) {
  return to_string(v[0]) + ", " + to_string(v[1]) + ", " + to_string(v[2]);
}

namespace {

Error bad_part(std::string_view part, std::string_view why) {
  return Error("'" + std::string(part) + "' in an operation " + std::string(why) +
               "; accepted are x,y+1/2,-z or x-y,x,z+0.25");
}

/// Keeps determinants within an int, however many terms a part has.
constexpr Fraction largest_factor(99);

/// One signed term such as "-x", "2y", "+1/2" of component i.
void read_term(std::string_view part, std::string term, std::size_t i, Operation& operation) {
  const char last = static_cast<char>(std::tolower(static_cast<unsigned char>(term.back())));
  if (last < 'x' || last > 'z') {
    try {
      operation.translation[i] += parse_fraction(term);
    } catch (const Error&) {
      throw bad_part(part, "is no sum of x, y, z and a number");
    }
    return;
  }
  const auto j = static_cast<std::size_t>(last - 'x');
  term.pop_back();
  if (!term.empty() && term.back() == '*') term.pop_back();
  if (term.empty() || term == "+" || term == "-") term += "1";
  Fraction factor;
  try {
    factor = parse_fraction(term);
  } catch (const Error&) {
    throw bad_part(part, "is no sum of x, y, z and a number");
  }
  if (!factor.is_integer() || factor > largest_factor || factor < -largest_factor)
    throw bad_part(part, "has a factor that is not a small integer");
  int& entry = operation.rotation[i][j];
  entry += static_cast<int>(factor.numerator());
  if (Fraction(entry) > largest_factor || Fraction(entry) < -largest_factor)
    throw bad_part(part, "has a factor that is not a small integer");
}

void read_part(std::string_view part, std::size_t i, Operation& operation) {
  std::string compact;
  for (const char c : part)
    if (std::isspace(static_cast<unsigned char>(c)) == 0) compact += c;
  if (compact.empty()) throw bad_part(part, "is empty");
  std::size_t start = 0;
  while (start < compact.size()) {
    std::size_t end = start + 1;
    while (end < compact.size() && compact[end] != '+' && compact[end] != '-') ++end;
    // A letter ends a term too, so that "xy" is refused below and "x1/2" as well.
    read_term(part, compact.substr(start, end - start), i, operation);
    start = end;
  }
}

}  // namespace

Operation parse_operation(std::string_view text) {
  Operation operation;
  operation.rotation = {};
  std::size_t start = 0;
  for (std::size_t i = 0; i < 3; ++i) {
    const std::size_t end = text.find(',', start);
    if ((end == std::string_view::npos) != (i == 2))
      throw Error("operation '" + std::string(text) +
                  "' does not have three parts; accepted are x,y+1/2,-z or x-y,x,z+0.25");
    read_part(text.substr(start, end == std::string_view::npos ? end : end - start), i, operation);
    start = end + 1;
  }
  const int det = determinant(operation.rotation);
  if (det != 1 && det != -1)
    throw Error("operation '" + std::string(text) + "' has the determinant " + std::to_string(det) +
                "; a symmetry operation has 1 or -1");
  return operation;
}

}  // namespace spinsieve
