#include "arrangement/magnetic_database.hpp"

#include <algorithm>
#include <map>
#include <set>
#include <string>
#include <string_view>
#include <vector>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "crystal/space_group.hpp"
#include "exact/error.hpp"

namespace spinsieve {
namespace {

std::set<std::string> texts(const std::vector<Operation>& operations) {
  std::set<std::string> result;
  for (Operation operation : operations) {
    operation.translation = modulo_one(operation.translation);
    result.insert(to_string(operation));
  }
  return result;
}

std::vector<Operation> select(const std::vector<PrimedOperation>& operations, bool primed) {
  std::vector<Operation> result;
  for (const auto& operation : operations)
    if (operation.primed == primed) result.push_back(operation.operation);
  return result;
}

TEST(MagneticDatabaseTest, CountsOfTypesAreThoseOfBelovNeronovaAndSmirnova) {
  std::map<int, int> count;
  for (int uni_number = 1; uni_number <= 1651; ++uni_number)
    ++count[magnetic_symbols(uni_number).type];
  // Belov, Neronova & Smirnova 1955; Litvin 2013: 230 + 230 + 674 + 517 = 1651.
  EXPECT_EQ(count, (std::map<int, int>{{1, 230}, {2, 230}, {3, 674}, {4, 517}}));
}

TEST(MagneticDatabaseTest, SymbolsAndOperationsAgreeInNumberAndType) {
  for (int uni_number = 1; uni_number <= 1651; ++uni_number) {
    SCOPED_TRACE(uni_number);
    const MagneticSymbols& symbols = magnetic_symbols(uni_number);
    const MagneticType type = magnetic_type(uni_number);
    EXPECT_EQ(symbols.bns_number, type.bns_number);
    EXPECT_EQ(symbols.og_number, type.og_number);
    EXPECT_EQ(symbols.type, type.type);
    EXPECT_EQ(
        PrimitiveMagneticGroup(standard_magnetic_operations(uni_number), RationalLattice().basis())
            .type(),
        type.type);
  }
}

// The list of spglib 2.0.2 has the unprimed operations of other groups for C_ccc2, C_acc2 and
// C_Acc2, so that the first and the last were taken for C_cmc2_1 and C_Amc2_1.
TEST(MagneticDatabaseTest, TheLeadingGroupIsTheTabulatedOneOperationByOperation) {
  for (int uni_number = 1; uni_number <= 1651; ++uni_number) {
    SCOPED_TRACE(std::string(magnetic_symbols(uni_number).bns_symbol));
    const auto operations = standard_magnetic_operations(uni_number);
    const int number = magnetic_type(uni_number).number;
    const SpaceGroup tabulated = SpaceGroup::from_number(number);
    std::vector<Operation> expected;
    for (const FractionVector& centring : tabulated.centrings())
      for (Operation operation : tabulated.operations()) {
        operation.translation = operation.translation + centring;
        expected.push_back(operation);
      }
    const int type = magnetic_symbols(uni_number).type;
    std::vector<Operation> leading = select(operations, false);
    if (type == 3) {  // the family group, primes ignored
      const auto primed = select(operations, true);
      EXPECT_EQ(primed.size(), leading.size());
      leading.insert(leading.end(), primed.begin(), primed.end());
    }
    EXPECT_EQ(leading.size(), expected.size());
    EXPECT_EQ(texts(leading), texts(expected));
  }
}

TEST(MagneticDatabaseTest, ThePrimedTranslationIsTheOneOfTheLatticeSymbol) {
  const std::map<std::string, std::string> translations = {
      // Litvin 2013, table of BNS lattice symbols (from memory); standard axes.
      {"a", "x+1/2,y,z"},         {"b", "x,y+1/2,z"},     {"c", "x,y,z+1/2"},
      {"A", "x,y+1/2,z+1/2"},     {"B", "x+1/2,y,z+1/2"}, {"C", "x+1/2,y+1/2,z"},
      {"I", "x+1/2,y+1/2,z+1/2"}, {"S", "x,y,z+1/2"},
  };
  int checked = 0;
  for (int uni_number = 1; uni_number <= 1651; ++uni_number) {
    const MagneticSymbols& symbols = magnetic_symbols(uni_number);
    if (symbols.type != 4) continue;
    SCOPED_TRACE(std::string(symbols.bns_symbol));
    std::string expected = translations.at(std::string(symbols.bns_symbol.substr(2, 1)));
    if (symbols.bns_symbol.starts_with("R_I")) expected = "x,y,z+1/2";
    if (symbols.bns_symbol.starts_with("F_S")) expected = "x+1/2,y+1/2,z+1/2";
    EXPECT_TRUE(texts(select(standard_magnetic_operations(uni_number), true)).contains(expected));
    ++checked;
  }
  EXPECT_EQ(checked, 517);
}

/// One letter or number of a Hermann-Mauguin symbol and the direction it speaks of.
struct Token {
  std::string text;
  bool primed = false;
  std::size_t slot = 0;
};

std::vector<Token> tokens_of(std::string_view symbol) {
  std::vector<Token> result;
  std::size_t slot = 0;
  for (std::size_t i = 1; i < symbol.size();) {
    Token token;
    if (symbol[i] == '/') {
      --slot;
      ++i;
    }
    if (symbol[i] == '-') token.text += symbol[i++];
    token.text += symbol[i++];
    if (i < symbol.size() && symbol[i] == '_') i += 2;
    if (i < symbol.size() && symbol[i] == '\'') {
      token.primed = true;
      ++i;
    }
    token.slot = slot++;
    result.push_back(token);
  }
  return result;
}

std::vector<IntVector> directions(int number) {
  if (number < 3) return {{1, 0, 0}};
  if (number < 16) return {{0, 1, 0}};
  if (number < 75) return {{1, 0, 0}, {0, 1, 0}, {0, 0, 1}};
  if (number < 143) return {{0, 0, 1}, {1, 0, 0}, {1, 1, 0}};
  if (number < 195) return {{0, 0, 1}, {1, 0, 0}, {1, -1, 0}};
  return {{1, 0, 0}, {1, 1, 1}, {1, 1, 0}};
}

bool speaks_of(const Token& token, const IntVector& direction, const IntMatrix& R) {
  const bool mirror = std::string("mabcnde").find(token.text) != std::string::npos;
  const int order = mirror ? 2 : token.text.back() - '0';
  const bool improper = mirror || token.text.front() == '-';
  if (rotation_order(R) != order || (determinant(R) < 0) != improper) return false;
  if (order == 1) return true;
  const IntVector axis = axis_direction(R);
  return axis == direction || axis == IntVector{-direction[0], -direction[1], -direction[2]};
}

// Symbols and operations come from different tables; every prime of the one must be in the other.
TEST(MagneticDatabaseTest, PrimesOfTheSymbolAreThoseOfTheOperations) {
  int checked = 0;
  for (int uni_number = 1; uni_number <= 1651; ++uni_number) {
    const MagneticSymbols& symbols = magnetic_symbols(uni_number);
    if (symbols.type != 3) continue;
    SCOPED_TRACE(std::string(symbols.bns_symbol));
    const auto operations = standard_magnetic_operations(uni_number);
    for (const Token& token : tokens_of(symbols.bns_symbol)) {
      if (token.text == "1") continue;
      const IntVector direction = directions(magnetic_type(uni_number).number).at(token.slot);
      int found = 0;
      for (const auto& [operation, primed] : operations) {
        if (!speaks_of(token, direction, operation.rotation)) continue;
        ++found;
        EXPECT_EQ(primed, token.primed) << token.text << " " << to_string(operation);
      }
      EXPECT_GT(found, 0) << token.text << " slot " << token.slot;
      ++checked;
    }
  }
  EXPECT_GT(checked, 1800);
}

TEST(MagneticDatabaseTest, RowsRetypedFromTheSource) {
  const struct {
    int uni_number;
    const char* bns_number;
    const char* bns_symbol;
    const char* og_number;
  } rows[] = {
      // Litvin 2013 (from memory), and the groups quoted by Roth 1958 and Erickson 1953 compounds.
      {3, "1.3", "P_S1", "1.3.3"},
      {546, "62.448", "Pn'ma'", "62.8.509"},
      {1651, "230.149", "Ia'-3'd'", "230.5.1651"},
  };
  for (const auto& [uni_number, bns_number, bns_symbol, og_number] : rows) {
    EXPECT_EQ(magnetic_symbols(uni_number).bns_number, bns_number);
    EXPECT_EQ(magnetic_symbols(uni_number).bns_symbol, bns_symbol);
    EXPECT_EQ(magnetic_symbols(uni_number).og_number, og_number);
  }
}

TEST(MagneticDatabaseTest, RefusesOtherNumbers) {
  EXPECT_THAT(
      [] { magnetic_symbols(0); },
      ::testing::ThrowsMessage<Error>("magnetic group number 0; it must be from 1 to 1651"));
  EXPECT_THROW(standard_magnetic_operations(1652), Error);
}

}  // namespace
}  // namespace spinsieve
