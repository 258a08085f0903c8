#include "report/magnetic_cif.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <numbers>
#include <set>
#include <string>
#include <vector>

#include <gemmi/cif.hpp>
#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "arrangement/candidate.hpp"
#include "crystal/space_group.hpp"
#include "modes/wavevector_modes.hpp"

namespace spinsieve {
namespace {

FractionVector vector_of(int a, int b, int c, int denominator = 1) {
  return {Fraction(a, denominator), Fraction(b, denominator), Fraction(c, denominator)};
}

std::string value(const gemmi::cif::Block& block, const std::string& tag) {
  const std::string* found = block.find_value(tag);
  return found == nullptr ? "missing" : gemmi::cif::as_string(*found);
}

double number(const gemmi::cif::Block& block, const std::string& tag) {
  return std::stod(value(block, tag));
}

PrimedOperation parsed(const std::string& text) {
  const std::size_t comma = text.rfind(',');
  return {parse_operation(text.substr(0, comma)), text.substr(comma + 1) == "-1"};
}

std::vector<PrimedOperation> operations(gemmi::cif::Block& block, const std::string& category) {
  std::vector<PrimedOperation> result;
  for (auto row : block.find(category + ".", {"id", "xyz"})) result.push_back(parsed(row.str(1)));
  return result;
}

/// What a reader gets out of a commensurate magnetic CIF: the group, and the moment at every
/// position of the cell, µB along a/|a|, b/|b|, c/|c| of that cell.
struct ReadBack {
  MagneticGroup group;
  Cell cell;
  std::vector<std::pair<FractionVector, Vector3>> moments;
};

Vector3 turned(const PrimedOperation& g, const Cell& cell, const Vector3& moment) {
  const Vector3 m = cell.lattice_from_crystal_axes(moment);
  Vector3 result{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      result[i] += determinant(g.operation.rotation) * (g.primed ? -1 : 1) *
                   g.operation.rotation[i][j] * m[j];
  return cell.crystal_axes_from_lattice(result);
}

ReadBack read_back(const std::string& text) {
  gemmi::cif::Document document = gemmi::cif::read_string(text);
  gemmi::cif::Block& block = document.sole_block();
  std::vector<PrimedOperation> all;
  for (const auto& centring : operations(block, "_space_group_symop_magn_centering"))
    for (auto g : operations(block, "_space_group_symop_magn_operation")) {
      g.operation.translation =
          modulo_one(g.operation.translation + centring.operation.translation);
      g.primed = g.primed != centring.primed;
      all.push_back(g);
    }
  const std::vector<FractionVector> integers = {vector_of(1, 0, 0), vector_of(0, 1, 0),
                                                vector_of(0, 0, 1)};
  const Cell cell(number(block, "_cell_length_a"), number(block, "_cell_length_b"),
                  number(block, "_cell_length_c"), number(block, "_cell_angle_alpha"),
                  number(block, "_cell_angle_beta"), number(block, "_cell_angle_gamma"));
  ReadBack result{MagneticGroup::from_operations(all, integers), cell, {}};
  std::map<std::string, FractionVector> positions;
  for (auto row : block.find(
           {"_atom_site_label", "_atom_site_fract_x", "_atom_site_fract_y", "_atom_site_fract_z"}))
    for (std::size_t i = 0; i < 3; ++i)
      positions[row.str(0)][i] = nearest_simple(parse_fraction(row.str(static_cast<int>(i) + 1)),
                                                240, Fraction(1, 1000000));
  for (auto row : block.find("_atom_site_moment.",
                             {"label", "crystalaxis_x", "crystalaxis_y", "crystalaxis_z"})) {
    const Vector3 moment = {std::stod(row.str(1)), std::stod(row.str(2)), std::stod(row.str(3))};
    for (const auto& g : all)
      result.moments.emplace_back(modulo_one(g.operation.apply(positions.at(row.str(0)))),
                                  turned(g, cell, moment));
  }
  return result;
}

std::vector<PrimedOperation> generated(const std::vector<std::string>& generators,
                                       const RationalLattice& lattice) {
  std::vector<PrimedOperation> result = {{Operation{}, false}};
  std::set<std::string> known = {to_string(result[0].operation)};
  for (std::size_t i = 0; i < result.size(); ++i) {
    for (const auto& text : generators) {
      const PrimedOperation g = parsed(text);
      PrimedOperation next{result[i].operation * g.operation, result[i].primed != g.primed};
      next.operation.translation = lattice.reduced(next.operation.translation);
      if (known.insert(to_string(next.operation) + (next.primed ? "'" : "")).second)
        result.push_back(next);
    }
  }
  return result;
}

MagneticGroup group_of(const std::vector<std::string>& generators,
                       const std::vector<FractionVector>& lattice) {
  return MagneticGroup::from_operations(generated(generators, RationalLattice(lattice)), lattice);
}

const std::vector<FractionVector> integers = {vector_of(1, 0, 0), vector_of(0, 1, 0),
                                              vector_of(0, 0, 1)};

MagneticCifAtom atom(const std::string& label, const std::string& type,
                     const FractionVector& position) {
  MagneticCifAtom result;
  result.label = label;
  result.type = type;
  result.position = position;
  return result;
}

TEST(MagneticCifTest, MnF2AsWritten) {
  // Erickson 1953: moments (+-) along c; cell and x of F from that structure, values invented.
  CommensurateStructure structure{
      {"invented rutile, 4 K",
       Cell(4.874, 4.874, 3.31, 90, 90, 90),
       136,
       "P 42/m n m",
       {vector_of(0, 0, 0)}},
      group_of({"-y+1/2,x+1/2,z+1/2,-1", "-x+1/2,y+1/2,-z+1/2,+1", "-x,-y,-z,+1"}, integers),
      {atom("M1", "Mn2+", vector_of(0, 0, 0)), atom("M1", "Mn2+", vector_of(1, 1, 1, 2)),
       atom("F1", "F", {Fraction(61, 200), Fraction(61, 200), Fraction(0)})},
      {{0, 0, 4.6}, {0, 0, -4.6}, {}}};
  structure.atoms[0].b_iso = 0.3;
  const std::string text = magnetic_cif(structure);
  gemmi::cif::Document document = gemmi::cif::read_string(text);
  const gemmi::cif::Block& block = document.sole_block();
  EXPECT_EQ(block.name, "invented_rutile_4_K");
  EXPECT_EQ(value(block, "_space_group_magn.number_BNS"), "136.499");
  EXPECT_EQ(value(block, "_space_group_magn.name_BNS"), "P4_2'/mnm'");
  EXPECT_EQ(value(block, "_space_group_magn.number_OG"), "136.5.1156");
  EXPECT_EQ(value(block, "_space_group_magn.transform_BNS_Pp_abc"), "a,b,c;0,0,0");
  EXPECT_EQ(value(block, "_parent_space_group.child_transform_Pp_abc"), "a,b,c;0,0,0");
  EXPECT_EQ(value(block, "_parent_space_group.IT_number"), "136");
  EXPECT_THAT(text, ::testing::HasSubstr("M1 Mn2+ 0 0 0 1.0000 0.3000\nF1 F 0.305 0.305 0"));
  EXPECT_THAT(text, ::testing::HasSubstr("M1 0.00000 0.00000 4.60000 0,0,mz\n"));

  structure.moments[1][2] = 4.6;
  EXPECT_THAT([&] { magnetic_cif(structure); },
              ::testing::ThrowsMessage<std::logic_error>(
                  "the moment at 1/2, 1/2, 1/2 does not follow from its equivalents"));
}

/// Checks that a reader finds the same group and, on the parent's axes, the moment
/// amplitude · cos(2π k·r) at every atom r of the sublattice through the origin.
void expect_same_arrangement(const CommensurateStructure& structure, const FractionVector& k,
                             const Vector3& amplitude, std::size_t atoms_in_cell) {
  const ReadBack read = read_back(magnetic_cif(structure));
  EXPECT_EQ(read.group.uni_number(), structure.group.uni_number());
  const BasisTransformation cell = magnetic_cell(structure.group);
  std::set<FractionVector> positions;
  const Vector3 expected = structure.parent.cell.cartesian_from_crystal_axes(amplitude);
  for (const auto& [position, moment] : read.moments) {
    positions.insert(position);
    // The frames agree because the first axis and the plane of the first two do.
    const FractionVector parent = times(cell.P, position) + cell.p;
    const double sign = std::cos(2 * std::numbers::pi * dot(k, parent).to_double());
    const Vector3 found = read.cell.cartesian_from_crystal_axes(moment);
    for (std::size_t i = 0; i < 3; ++i) EXPECT_NEAR(found[i], sign * expected[i], 2e-5);
  }
  EXPECT_EQ(positions.size(), atoms_in_cell);
}

TEST(MagneticCifTest, ManganeseOxideReadsBackInTheDoubledCell) {
  // Roth 1958: k = (1/2,1/2,1/2), moments along [11-2]; C_c2/c.
  const std::vector<FractionVector> half = {vector_of(1, 1, 0), vector_of(1, -1, 0, 2),
                                            vector_of(0, 1, -1, 2)};
  const Vector3 amplitude = {1.8, 1.8, -3.6};
  const CommensurateStructure structure{
      {"oxide", Cell(4.44, 4.44, 4.44, 90, 90, 90), 225, "F m -3 m", {vector_of(1, 1, 1, 2)}},
      group_of({"-y,-x,-z,-1", "-x,-y,-z,+1", "x+1/2,y+1/2,z,-1"}, half),
      {atom("M1", "Mn2+", vector_of(0, 0, 0))},
      {amplitude}};
  EXPECT_EQ(to_string(magnetic_cell(structure.group)), "2a,2b,2c;0,0,0");
  expect_same_arrangement(structure, vector_of(1, 1, 1, 2), amplitude, 32);
}

TEST(MagneticCifTest, HexagonalAxesReadBackWithOneOfThemDoubled) {
  const std::vector<FractionVector> lattice = {vector_of(2, 0, 0), vector_of(0, 1, 0),
                                               vector_of(0, 0, 1)};
  const MagneticGroup group =
      group_of({"-x,-y,z,+1", "x,x-y,-z,-1", "-x,-y,-z,+1", "x+1,y,z,-1"}, lattice);
  const Vector3 amplitude = {0, 0, 3.5};
  const CommensurateStructure structure{
      {"layers", Cell(5.1, 5.1, 6.3, 90, 90, 120), 191, "P 6/m m m", {vector_of(1, 0, 0, 2)}},
      group,
      {atom("M1", "Fe3+", vector_of(0, 0, 0))},
      {amplitude}};
  EXPECT_EQ(to_string(magnetic_cell(group)), "2a,b,c;0,0,0");
  expect_same_arrangement(structure, vector_of(1, 0, 0, 2), amplitude, 2);
}

TEST(MagneticCifTest, AxesThatMixAreWrittenInTheStandardSetting) {
  // A face-centred cubic lattice on primitive axes, moments along the cubic c, k = (0,0,1) there;
  // the twofold axis along the cubic a takes the third axis to b − a, but 2a and 2b are needed.
  const std::vector<FractionVector> lattice = {vector_of(1, 1, 0), vector_of(1, -1, 0),
                                               vector_of(0, 0, 1)};
  const MagneticGroup group =
      group_of({"-x-y-z,z,y,-1", "y,x,-x-y-z,+1", "-x,-y,-z,+1", "x+1,y,z,-1"}, lattice);
  const Cell cell(3.1, 3.1, 3.1, 60, 60, 60);
  const Vector3 amplitude = {2, 2, -2};  // along a + b − c
  const CommensurateStructure structure{{"primitive", cell, 0, "", {vector_of(1, 1, 0, 2)}},
                                        group,
                                        {atom("M1", "Fe3+", vector_of(0, 0, 0))},
                                        {amplitude}};
  const ReadBack read = read_back(magnetic_cif(structure));
  EXPECT_EQ(read.group.uni_number(), group.uni_number());
  EXPECT_EQ(to_string(read.group.transformation()), "a,b,c;0,0,0");
  const double length = std::sqrt(8.0);  // by hand: a + b − c is √2 times as long as a
  const auto cells = static_cast<std::size_t>(std::lround(read.cell.volume() / cell.volume()));
  std::set<FractionVector> seen;
  double sum = 0;
  for (const auto& [position, moment] : read.moments) {
    if (!seen.insert(position).second) continue;
    const Vector3 found = read.cell.cartesian_from_crystal_axes(moment);
    EXPECT_NEAR(std::hypot(found[0], found[1], found[2]), length, 2e-5);
    sum += found[0] + found[1] + found[2];
  }
  EXPECT_EQ(seen.size(), cells);
  EXPECT_NEAR(sum, 0, 1e-4);
}

/// One row of "x1,-x2,x3+1/2,x1-x4+1/4,-1": coefficients of x1 … x4 and the constant.
std::array<double, 5> affine(const std::string& text) {
  std::array<double, 5> result{};
  std::size_t i = 0;
  while (i < text.size()) {
    double sign = 1;
    if (text[i] == '-' || text[i] == '+') sign = text[i++] == '-' ? -1 : 1;
    double size = 1;
    if (text[i] != 'x') {
      std::size_t length = 0;
      size = std::stod(text.substr(i), &length);
      i += length;
      if (i < text.size() && text[i] == '/') {
        size /= std::stod(text.substr(i + 1), &length);
        i += length + 1;
      }
    }
    if (i < text.size() && text[i] == 'x') {
      result.at(static_cast<std::size_t>(text[i + 1] - '1')) += sign * size;
      i += 2;
    } else {
      result[4] += sign * size;
    }
  }
  return result;
}

/// The arrangement itself: the moment of the atom at r when the phase is x4.
Vector3 wave(const SpaceGroup& group, const FourierField& arm, std::size_t parameters,
             const Vector3& c, const Vector3& r, double x4) {
  for (std::size_t j = 0; j < arm.atoms.size(); ++j) {
    const Vector3 listed = to_double(arm.atoms[j].position);
    const bool here = std::ranges::any_of(group.centrings(), [&](const FractionVector& centring) {
      const Vector3 T = to_double(centring);
      bool same = true;
      for (std::size_t i = 0; i < 3; ++i) {
        const double d = r[i] - listed[i] - T[i];
        same = same && std::abs(d - std::round(d)) < 1e-9;
      }
      return same;
    });
    if (!here) continue;
    const Vector3 k = to_double(arm.k);
    const double phase =
        2 * std::numbers::pi * (x4 - k[0] * listed[0] - k[1] * listed[1] - k[2] * listed[2]);
    Vector3 result{};
    for (std::size_t p = 0; p < parameters; ++p)
      for (std::size_t i = 0; i < 3; ++i)
        result[i] += 2 * c.at(p) * std::real(arm.component(p, j)[i] * std::polar(1.0, phase));
    return result;
  }
  ADD_FAILURE() << "no atom at " << r[0] << " " << r[1] << " " << r[2];
  return {};
}

ModulatedStructure modulated(const Candidate& candidate, const SpaceGroup& group, const Cell& cell,
                             const Vector3& c) {
  const MomentField field = to_moment_field(candidate.field, cell);
  const FourierField& arm = field.arms.at(0);
  ModulatedStructure result{{candidate.id, cell, group.number(), group.symbol(), {arm.k}},
                            candidate.superspace,
                            {group.centrings().begin(), group.centrings().end()},
                            {},
                            {}};
  for (std::size_t j = 0; j < arm.atoms.size(); ++j) {
    result.atoms.push_back(atom("M1", "Mn3+", arm.atoms[j].position));
    FourierField::Component S{};
    for (std::size_t p = 0; p < field.parameters; ++p)
      for (std::size_t i = 0; i < 3; ++i) S[i] += c.at(p) * arm.component(p, j)[i];
    result.components.push_back(S);
  }
  return result;
}

// The classic error: with x4 = k·r the cosine and sine amplitudes belong to S exp(−2πi k·r_j), and
// an operation shifts the phase by k·t besides its own.
TEST(MagneticCifTest, ModulatedCandidatesKeepTheirWrittenOperations) {
  const struct {
    int number;
    FractionVector k;
    FractionVector position;
    Cell cell;
  } cases[] = {
      {62,
       {Fraction(0), Fraction(7, 25), Fraction(0)},
       vector_of(0, 0, 1, 2),
       Cell(5.74, 7.69, 5.53, 90, 90, 90)},
      {136,
       {Fraction(0), Fraction(0), Fraction(3, 17)},
       vector_of(0, 0, 0),
       Cell(4.9, 4.9, 3.3, 90, 90, 90)},
      {14,
       {Fraction(1, 2), Fraction(5, 23), Fraction(0)},
       {Fraction(1, 5), Fraction(1, 7), Fraction(2, 9)},
       Cell(5.1, 6.2, 7.3, 90, 104, 90)},
      {167,
       {Fraction(0), Fraction(0), Fraction(4, 19)},
       {Fraction(0), Fraction(0), Fraction(1, 6)},
       Cell(5.0, 5.0, 13.6, 90, 90, 120)},
  };
  int checked = 0;
  for (const auto& [number, k, position, cell] : cases) {
    const SpaceGroup group = SpaceGroup::from_number(number);
    const auto tables = std::make_shared<const SymmetryTables>(group);
    const std::vector<Site> sites = {{"M1", position, {}}};
    const std::vector<WavevectorModes> modes = {wavevector_modes(tables, Wavevector{k}, sites)};
    for (const Candidate& candidate : enumerate_candidates(modes, {})) {
      SCOPED_TRACE(std::to_string(number) + " " + candidate.id);
      if (candidate.field.parameters > 3) continue;
      const Vector3 c = {1.3, -0.7, 0.4};
      const ModulatedStructure structure = modulated(candidate, group, cell, c);
      gemmi::cif::Document document = gemmi::cif::read_string(magnetic_cif(structure));
      gemmi::cif::Block& block = document.sole_block();
      const MomentField field = to_moment_field(candidate.field, cell);
      const FourierField& arm = field.arms[0];
      std::vector<std::string> texts;
      for (const char* category :
           {"_space_group_symop_magn_ssg_operation.", "_space_group_symop_magn_ssg_centering."})
        for (auto row : block.find(category, {"id", "algebraic"})) texts.push_back(row.str(1));
      EXPECT_EQ(texts.size(), candidate.superspace.size() + 2 * group.centrings().size());
      for (const auto& text : texts) {
        std::vector<std::string> rows;
        std::string rest = text + ",";
        for (std::size_t comma = rest.find(','); comma != std::string::npos;
             comma = rest.find(',')) {
          rows.push_back(rest.substr(0, comma));
          rest.erase(0, comma + 1);
        }
        ASSERT_EQ(rows.size(), 5U) << text;
        PrimedOperation g{parse_operation("x,y,z"), rows[4] == "-1"};
        std::array<std::array<double, 5>, 4> A{};
        for (std::size_t i = 0; i < 4; ++i) A.at(i) = affine(rows[i]);
        for (std::size_t i = 0; i < 3; ++i)
          for (std::size_t j = 0; j < 3; ++j)
            g.operation.rotation[i][j] = static_cast<int>(A.at(i).at(j));
        for (const FieldAtom& atom : arm.atoms) {
          const Vector3 r = to_double(atom.position);
          const double x4 = 0.123;
          Vector3 image{};
          double image_x4 = A[3][3] * x4 + A[3][4];
          for (std::size_t i = 0; i < 3; ++i) {
            image[i] = A.at(i)[4];
            for (std::size_t j = 0; j < 3; ++j) image[i] += A.at(i).at(j) * r[j];
            image_x4 += A[3].at(i) * r[i];
          }
          const Vector3 there = wave(group, arm, field.parameters, c, image, image_x4);
          const Vector3 expected = turned(g, cell, wave(group, arm, field.parameters, c, r, x4));
          for (std::size_t i = 0; i < 3; ++i) EXPECT_NEAR(there[i], expected[i], 1e-9) << text;
          ++checked;
        }
      }
      // The written amplitudes of the first atom are those of the wave at x4 = 0 and 1/4.
      const Vector3 first = to_double(arm.atoms[0].position);
      std::size_t axis = 0;
      for (auto row : block.find({"_atom_site_moment_Fourier.atom_site_label",
                                  "_atom_site_moment_Fourier_param.cos",
                                  "_atom_site_moment_Fourier_param.sin"})) {
        if (axis == 3) break;
        EXPECT_NEAR(std::stod(row.str(1)), wave(group, arm, field.parameters, c, first, 0)[axis],
                    1e-5);
        EXPECT_NEAR(std::stod(row.str(2)), wave(group, arm, field.parameters, c, first, 0.25)[axis],
                    1e-5);
        ++axis;
      }
    }
  }
  EXPECT_GT(checked, 400);
}

TEST(MagneticCifTest, SuperspaceTextByHand) {
  SuperspaceOperation operation;
  operation.operation = parse_operation("-x,-y+1/2,z+1/2");
  operation.reversing = false;
  operation.primed = true;
  operation.phase = Phase(1, 4);
  // k R = (-1/2, 0, 1/5) = k + (-1, 0, 0); τ = k·t + 1/4 = 1/10 + 1/4.
  EXPECT_EQ(superspace_text(operation, {Fraction(1, 2), Fraction(0), Fraction(1, 5)}),
            "-x1,-x2+1/2,x3+1/2,-x1+x4+7/20,-1");
}

}  // namespace
}  // namespace spinsieve
