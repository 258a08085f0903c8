#include "input/cif.hpp"

#include <cstdio>
#include <fstream>
#include <numbers>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "input/cif_syntax.hpp"

namespace spinsieve {
namespace {

using ::testing::ElementsAre;

CifStructure structure_of(const std::string& text) {
  return parse_cif(std::make_shared<const std::string>("a.cif"), text);
}

std::string refusal(const std::string& text) {
  try {
    structure_of(text);
  } catch (const Error& error) {
    return error.what();
  }
  return "no error";
}

const std::string orthorhombic_cell =
    "data_invented\n"
    "_cell_length_a 5.74\n_cell_length_b 7.69\n_cell_length_c 5.53\n"
    "_cell_angle_alpha 90\n_cell_angle_beta 90\n_cell_angle_gamma 90\n";

const std::string perovskite = orthorhombic_cell +
                               "_space_group_name_H-M_alt 'P n m a'\n"
                               "loop_\n_space_group_symop_operation_xyz\n"
                               "x,y,z\n'x+1/2, -y+1/2, -z+1/2'\n-x,y+1/2,-z\n-x+1/2,-y,z+1/2\n"
                               "-x,-y,-z\n-x+1/2,y+1/2,z+1/2\nx,-y+1/2,z\nx+1/2,y,-z+1/2\n"
                               "loop_\n_atom_site_label\n_atom_site_type_symbol\n"
                               "_atom_site_fract_x\n_atom_site_fract_y\n_atom_site_fract_z\n"
                               "_atom_site_U_iso_or_equiv\n_atom_site_occupancy\n"
                               "M1 Mn3+ 0 0 0.5 0.0050(2) 1\n"
                               "A1 La3+ 0.5490(3) 0.25 0.0100(6) ? .\n"
                               "O1 O2- -0.0140(4) 1/4 -7.0e-2 0.01 0.98(1)\n";

TEST(CifTest, AParentStructureIsReadExactly) {
  const CifStructure structure = structure_of(perovskite);
  EXPECT_EQ(structure.name, "invented");
  EXPECT_EQ(structure.cell.b(), 7.69);
  EXPECT_EQ(structure.group.hall_number(), 292);
  EXPECT_THAT(structure.notes, ElementsAre());
  ASSERT_EQ(structure.atoms.size(), 3U);
  const CifAtom& m = structure.atoms[0];
  EXPECT_EQ(m.label, "M1");
  EXPECT_EQ(m.type_symbol, "Mn3+");
  EXPECT_EQ(to_string(m.position), "0, 0, 1/2");
  EXPECT_NEAR(*m.b_iso, 8 * std::numbers::pi * std::numbers::pi * 0.005, 1e-12);
  EXPECT_EQ(m.place.line(), 27);
  EXPECT_EQ(m.place.column(), 1);
  const CifAtom& a = structure.atoms[1];
  EXPECT_EQ(to_string(a.position), "549/1000, 1/4, 1/100");
  EXPECT_FALSE(a.b_iso);
  EXPECT_EQ(a.occupancy, 1);
  EXPECT_EQ(to_string(structure.atoms[2].position), "-7/500, 1/4, -7/100");
  EXPECT_EQ(structure.atoms[2].occupancy, 0.98);
}

TEST(CifTest, OldNewAndDottedNamesMeanTheSame) {
  for (const char* name : {"_symmetry_equiv_pos_as_xyz", "_space_group_symop.operation_xyz",
                           "_SPACE_GROUP_SYMOP_OPERATION_XYZ"}) {
    const CifStructure structure =
        structure_of(orthorhombic_cell + "loop_\n" + name + "\nx,y,z\n-x,-y,-z\n");
    EXPECT_EQ(structure.group.number(), 2) << name;
  }
  EXPECT_EQ(structure_of("data_x\n_cell.length_a 4\n_cell.length_b 4\n_cell.length_c 4\n"
                         "_space_group.name_H-M_alt 'P m -3 m'\n")
                .group.number(),
            221);
}

TEST(CifTest, SymbolsServeWhereNoOperationsAreListed) {
  const struct {
    const char* lines;
    int hall_number;
    const char* note;
  } cases[] = {
      {"_space_group_name_Hall '-P 2c 2ab'\n", 294,
       "no operations are listed; -P 2c 2ab is taken as P 2_1/b 2_1/n 2_1/m, setting cab"},
      {"_symmetry_space_group_name_H-M 'P b n m'\n", 294,
       "no operations are listed; P b n m is taken as P 2_1/b 2_1/n 2_1/m, setting cab"},
      {"_space_group_IT_number 62\n", 292,
       "no operations are listed; 62 is taken as P 2_1/n 2_1/m 2_1/a"},
      {"_space_group_name_H-M_alt ?\n_symmetry_Int_Tables_number 62\n", 292,
       "no operations are listed; 62 is taken as P 2_1/n 2_1/m 2_1/a"},
      // Hall before Hermann-Mauguin: "P 2" as a Hall symbol has the unique axis c.
      {"_space_group_name_H-M_alt 'P 2'\n_space_group_name_Hall 'P 2'\n", 4,
       "no operations are listed; P 2 is taken as P 1 1 2, setting c"},
  };
  for (const auto& [lines, hall_number, note] : cases) {
    const CifStructure structure = structure_of(orthorhombic_cell + lines);
    EXPECT_EQ(structure.group.hall_number(), hall_number);
    EXPECT_THAT(structure.notes, ElementsAre(note));
  }
}

TEST(CifTest, DecimalTranslationsMeanTheirFractions) {
  const CifStructure structure = structure_of(
      "data_x\n_cell_length_a 5\n_cell_length_b 5\n_cell_length_c 9\n_cell_angle_gamma 120\n"
      "loop_\n_symmetry_equiv_pos_as_xyz\nx,y,z\n-y,x-y,z+0.3333\n-x+y,-x,z+0.6667\n");
  EXPECT_EQ(structure.group.number(), 144);
  EXPECT_THAT(structure.notes,
              ElementsAre("the translation 3333/10000 of operation -y,x-y,z+0.3333 is read as 1/3",
                          "the translation 6667/10000 of operation -x+y,-x,z+0.6667 is read as "
                          "2/3"));
}

TEST(CifTest, OperationsDecideAndContradictionsAreTold) {
  const std::string operations = "loop_\n_symmetry_equiv_pos_as_xyz\nx,y,z\n-x,-y,-z\n";
  EXPECT_THAT(structure_of(orthorhombic_cell + "_space_group_IT_number 62\n" + operations).notes,
              ElementsAre("the listed operations form P -1 (No. 2), though the file also says 62; "
                          "the operations are used"));
  EXPECT_THAT(
      structure_of(orthorhombic_cell + "loop_\n_symmetry_equiv_pos_as_xyz\n-x,-y,-z\n").notes,
      ElementsAre("the 1 listed operations generate 2, all of which are used"));
}

TEST(CifTest, AnOddOriginIsUnderstood) {
  const CifStructure structure =
      structure_of(orthorhombic_cell + "loop_\n_symmetry_equiv_pos_as_xyz\nx,y,z\n-x+1/5,-y,-z\n");
  EXPECT_EQ(structure.group.number(), 2);
  EXPECT_EQ(structure.group.hall_number(), 0);
  // The origin moves to an inversion centre: 2s ≡ 1/5 modulo 1.
  EXPECT_EQ((Fraction(2) * structure.group.origin_shift()[0]).modulo_one(), Fraction(1, 5));
}

TEST(CifTest, AnisotropicDisplacementsAreReadByLabel) {
  const CifStructure structure =
      structure_of(perovskite +
                   "loop_\n_atom_site_aniso_label\n_atom_site_aniso_U_11\n_atom_site_aniso_U_22\n"
                   "_atom_site_aniso_U_33\n_atom_site_aniso_U_12\n_atom_site_aniso_U_13\n"
                   "_atom_site_aniso_U_23\nA1 0.01(1) 0.02 0.03 0.004 0.005 0.006\n");
  EXPECT_FALSE(structure.atoms[0].u_ij);
  ASSERT_TRUE(structure.atoms[1].u_ij);
  EXPECT_THAT(*structure.atoms[1].u_ij, ElementsAre(0.01, 0.02, 0.03, 0.004, 0.005, 0.006));
}

TEST(CifTest, MissingTypesComeFromLabelsAndDummiesGo) {
  const CifStructure structure = structure_of(
      orthorhombic_cell +
      "_space_group_IT_number 1\nloop_\n_atom_site_label\n_atom_site_fract_x\n"
      "_atom_site_fract_y\n_atom_site_fract_z\n_atom_site_calc_flag\n_atom_site_B_iso_or_equiv\n"
      "Mn1a 0 0 0 d 0.3\nO2 .5 0 0 d 0.4\nCg 1 1 1 dum .\n");
  ASSERT_EQ(structure.atoms.size(), 2U);
  EXPECT_EQ(structure.atoms[0].type_symbol, "Mn");
  EXPECT_EQ(structure.atoms[0].b_iso, 0.3);
  EXPECT_EQ(structure.atoms[1].type_symbol, "O");
  EXPECT_EQ(structure.notes.back(), "the dummy site Cg is left out");
}

TEST(CifTest, TheFirstBlockWithACellIsUsed) {
  const CifStructure structure =
      structure_of("data_global\n_journal_year 2020\n" + perovskite + "data_other\n" +
                   orthorhombic_cell.substr(orthorhombic_cell.find("_cell")));
  EXPECT_EQ(structure.name, "invented");
  EXPECT_THAT(structure.notes,
              ElementsAre("the first of 2 data blocks with a cell is used: invented"));
}

TEST(CifTest, FaultsAreLocated) {
  const struct {
    std::string text;
    const char* message;
  } cases[] = {
      {"data_x\n_cell_length_a\n",
       "a.cif:2:1: error: the data name _cell_length_a has no value; '?' means unknown"},
      {"# nothing\n",
       "a.cif: error: no data block has a cell (_cell_length_a), so there is no structure to read"},
      {"crystal:\n",
       "a.cif:1:1: error: not a CIF from here on: expected block header (data_); "
       "expected are data_ blocks of names and values"},
      {"data_x\n_a 'open\n_b 1\n",
       "a.cif:2:9: error: not a CIF from here on: unterminated 'string'; expected are data_ blocks "
       "of names and values"},
      {"data_x\n_a 1\n_A 2\n",
       "a.cif:3:1: error: the data name _A occurs twice in a block; each may occur once"},
      {"data_x\nloop_\n_a\n_b\n1 2 3\n",
       "a.cif:2:1: error: a loop of 2 data names has 3 values; their number must be a multiple"},
      {"data_x\n_a 1\n",
       "a.cif: error: no data block has a cell (_cell_length_a), so there is no structure to read"},
      {"data_x\n_cell_length_a 5\n",
       "a.cif:1:6: error: the data block 'x' has no _cell_length_b, which is needed"},
      {"data_x\n_cell_length_a 5 _cell_length_b five _cell_length_c 5\n",
       "a.cif:2:33: error: 'five' is no cell parameter; accepted are 1.234 and 1.234(5)"},
      {"data_x\n_cell_length_a -5 _cell_length_b 5 _cell_length_c 5\n",
       "a.cif:2:1: error: cell length a = -5; it must be positive, in Å"},
      {orthorhombic_cell,
       "a.cif:1:6: error: the data block 'invented' has no operations, symbol or number of a space "
       "group; one of _space_group_symop_operation_xyz, _space_group_name_Hall, "
       "_space_group_name_H-M_alt, _space_group_IT_number is needed"},
      {orthorhombic_cell + "_space_group_IT_number 221\n",
       "a.cif:2:1: error: cell 5.74, 7.69, 5.53, 90, 90, 90 does not fit P m -3 m; it requires "
       "a = b = c, α = 90°, β = 90°, γ = 90°"},
      {orthorhombic_cell + "loop_ _symmetry_equiv_pos_as_xyz\nx,y,z\n -x,y,q\n",
       "a.cif:10:2: error: 'q' in an operation is no sum of x, y, z and a number; accepted are "
       "x,y+1/2,-z or x-y,x,z+0.25"},
      {orthorhombic_cell + "_space_group_name_H-M_alt 'P n m q'\n",
       "a.cif:8:27: error: 'P n m q' is no known space group; the nearest symbols are 'P n m a', "
       "'P n m b', 'P n m n'; accepted are a number 1 to 230, a Hermann-Mauguin or a Hall symbol"},
      {orthorhombic_cell + "_space_group_IT_number 1\nloop_\n_atom_site_label\n"
                           "_atom_site_fract_x\n_atom_site_fract_y\n_atom_site_fract_z\n"
                           "'Mn µ' 0 0 ?\n",
       "a.cif:14:1: error: site Mn µ has no value of _atom_site_fract_z, which is needed"},
      {orthorhombic_cell + "_space_group_IT_number 1\nloop_\n_atom_site_label\n"
                           "_atom_site_fract_x\n_atom_site_fract_y\n_atom_site_fract_z\n"
                           "'Mn µ' 0 0 0.1(x)\n",
       "a.cif:14:12: error: '0.1(x)' has no standard uncertainty that can be read; accepted are "
       "1.234 and 1.234(5)"},
      {orthorhombic_cell + "_space_group_IT_number 1\nloop_\n_atom_site_label\n"
                           "_atom_site_fract_x\n_atom_site_fract_y\n_atom_site_fract_z\n"
                           "X1 0 0 0\n",
       "a.cif:14:1: error: site X1 has no _atom_site_type_symbol and its label does not begin with "
       "an element symbol; one of both is needed"},
      {orthorhombic_cell + "_space_group_IT_number 1\nloop_\n_atom_site_label\n"
                           "_atom_site_fract_x\n_atom_site_fract_y\n_atom_site_fract_z\n"
                           "_atom_site_occupancy\nO1 0 0 0 1.5\n",
       "a.cif:15:10: error: occupancy 1.5 of site O1; it must lie within 0 to 1"},
  };
  for (const auto& [text, message] : cases) EXPECT_EQ(refusal(text), message);
}

TEST(CifTest, AFileThatCannotBeReadIsNamed) {
  try {
    read_cif("/nonexistent/a.cif");
    FAIL();
  } catch (const Error& error) {
    EXPECT_STREQ(error.what(),
                 "/nonexistent/a.cif: error: cannot be read: No such file or directory");
  }
}

TEST(CifTest, FilesAreReadLikeTexts) {
  const std::string path = ::testing::TempDir() + "spinsieve_cif_test.cif";
  std::ofstream(path) << "\xEF\xBB\xBF" << perovskite;
  EXPECT_EQ(read_cif(path).atoms.size(), 3U);
  std::remove(path.c_str());
}

TEST(CifSyntaxTest, ValuesLoseTheirDelimiters) {
  const auto blocks = parse_cif_blocks(std::make_shared<const std::string>("a.cif"),
                                       "# comment\ndata_one\n_a 'it's here' # why\n_b \"?\"\n_c .\n"
                                       "_d\n;first\nsecond\n;\n"
                                       "save_frame\n_a 5\nsave_\n_e 1\ndata_two\n_a 2\n");
  ASSERT_EQ(blocks.size(), 2U);
  EXPECT_EQ(blocks[0].name, "one");
  EXPECT_EQ(blocks[0].find("_a")->values[0].text, "it's here");
  EXPECT_EQ(blocks[0].find("_b")->values[0].text, "?");
  EXPECT_FALSE(blocks[0].find("_b")->values[0].null);
  EXPECT_TRUE(blocks[0].find("_c")->values[0].null);
  EXPECT_EQ(blocks[0].find("_d")->values[0].text, "first\nsecond");
  EXPECT_EQ(blocks[0].find("_e")->values[0].text, "1");
  EXPECT_EQ(blocks[0].items.size(), 5U);
  EXPECT_EQ(blocks[1].find("_a")->values[0].text, "2");
}

}  // namespace
}  // namespace spinsieve
