#include "crystal/closure.hpp"

#include <algorithm>
#include <stdexcept>

#include "exact/error.hpp"

namespace spinsieve {

namespace {

/// Grows the closed set of lattice translations modulo the integers by one more.
void add_to_lattice(std::vector<FractionVector>& centrings, const FractionVector& v) {
  const FractionVector step = modulo_one(v);
  if (std::find(centrings.begin(), centrings.end(), step) != centrings.end()) return;
  const std::vector<FractionVector> before = centrings;
  for (FractionVector multiple = step;
       std::find(before.begin(), before.end(), multiple) == before.end();
       multiple = modulo_one(multiple + step)) {
    if (centrings.size() + before.size() > finest_lattice)
      throw Error("the operations make the translation " + to_string(step) +
                  " a lattice vector, which divides the cell more than " +
                  std::to_string(finest_lattice) +
                  "-fold; are translations exact, such as 1/3 instead of 0.3333?");
    for (const FractionVector& centring : before)
      centrings.push_back(modulo_one(centring + multiple));
  }
}

/// Rotations of a space group in reasonable axes stay far below; powers of others grow beyond.
constexpr int largest_factor = 99;

class Closure {
 public:
  explicit Closure(std::span<const Operation> generators) : generators_(generators) {}

  OperationSet run() {
    for (const Operation& generator : generators_) insert(generator);
    // A set of cosets that is closed under the generators from one side holds the whole group; the
    // translations met on the way generate its lattice (Schreier).
    // NOLINTNEXTLINE(modernize-loop-convert): the list grows while it is walked.
    for (std::size_t i = 0; i < set_.representatives.size(); ++i)
      for (const Operation& generator : generators_) insert(set_.representatives[i] * generator);
    // NOLINTNEXTLINE(modernize-loop-convert): the list grows while it is walked.
    for (std::size_t c = 0; c < set_.centrings.size(); ++c)
      for (const Operation& operation : set_.representatives)
        add_to_lattice(set_.centrings, times(operation.rotation, set_.centrings[c]));
    std::sort(set_.centrings.begin(), set_.centrings.end());
    return std::move(set_);
  }

 private:
  void insert(const Operation& operation) {
    for (const IntVector& row : operation.rotation)
      for (const int entry : row)
        if (entry < -largest_factor || entry > largest_factor)
          throw Error("operation " + to_string(operation) + " has factors beyond " +
                      std::to_string(largest_factor) +
                      "; the operations form no space group, or their axes are too skewed");
    const auto known =
        std::find_if(set_.representatives.begin(), set_.representatives.end(),
                     [&operation](const Operation& o) { return o.rotation == operation.rotation; });
    if (known != set_.representatives.end()) {
      add_to_lattice(set_.centrings, operation.translation - known->translation);
      return;
    }
    if (set_.representatives.size() == 48)
      throw Error("operation " + to_string(operation) +
                  " brings more than 48 rotations; the operations form no space group on these "
                  "axes");
    set_.representatives.push_back({operation.rotation, modulo_one(operation.translation)});
  }

  std::span<const Operation> generators_;
  OperationSet set_{{Operation{}}, {FractionVector{}}};
};

}  // namespace

bool OperationSet::in_lattice(const FractionVector& v) const {
  return std::binary_search(centrings.begin(), centrings.end(), modulo_one(v));
}

bool OperationSet::has_rotation(const IntMatrix& R) const {
  return std::any_of(representatives.begin(), representatives.end(),
                     [&R](const Operation& o) { return o.rotation == R; });
}

bool OperationSet::contains(const Operation& operation) const {
  return std::any_of(representatives.begin(), representatives.end(), [&](const Operation& o) {
    return o.rotation == operation.rotation && in_lattice(o.translation - operation.translation);
  });
}

OperationSet closure(std::span<const Operation> operations) {
  for (const Operation& operation : operations) {
    const int det = determinant(operation.rotation);
    if (det != 1 && det != -1)
      throw Error("operation " + to_string(operation) + " has the determinant " +
                  std::to_string(det) + "; a symmetry operation has 1 or -1");
  }
  return Closure(operations).run();
}

OperationSet transformed(const OperationSet& set, const FractionMatrix& transformation,
                         const FractionVector& shift) {
  const FractionMatrix back = inverse(transformation);
  OperationSet result;
  for (const Operation& operation : set.representatives) {
    const auto R =
        to_integers(product(product(transformation, to_fractions(operation.rotation)), back));
    if (!R) throw std::logic_error("a rotation is not integer in the new axes");
    result.representatives.push_back(
        {*R, modulo_one(times(transformation, operation.translation) + shift - times(*R, shift))});
  }
  for (std::size_t j = 0; j < 3; ++j)
    if (!set.in_lattice({back[0][j], back[1][j], back[2][j]}))
      throw std::logic_error("an axis of the new cell is no lattice vector");
  result.centrings = {FractionVector{}};
  for (std::size_t j = 0; j < 3; ++j)
    add_to_lattice(result.centrings,
                   {transformation[0][j], transformation[1][j], transformation[2][j]});
  for (const FractionVector& centring : set.centrings)
    add_to_lattice(result.centrings, times(transformation, centring));
  std::sort(result.centrings.begin(), result.centrings.end());
  return result;
}

}  // namespace spinsieve
