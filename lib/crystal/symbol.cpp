#include <algorithm>
#include <array>
#include <cctype>
#include <string>
#include <tuple>
#include <vector>

#include "crystal/space_group.hpp"
#include "crystal/space_group_builder.hpp"
#include "crystal/spglib.hpp"
#include "exact/error.hpp"

namespace spinsieve {

namespace {

struct Setting {
  HallSetting hall;
  std::vector<std::string> forms;               ///< Symbols that mean it, compacted.
  std::vector<std::vector<std::string>> words;  ///< The spaced ones among them, word by word.
};

/// Lower case, no underscores or brackets: "P 2_1/c" and "p 2(1)/C" become "p", "21/c".
std::vector<std::string> words(std::string_view text) {
  std::vector<std::string> result(1);
  for (const char c : text) {
    if (c == '_' || c == '(' || c == ')') continue;
    if (c != ' ' && c != '\t')
      result.back() += static_cast<char>(std::tolower(static_cast<unsigned char>(c)));
    else if (!result.back().empty())
      result.emplace_back();
  }
  if (result.back().empty()) result.pop_back();
  return result;
}

std::string joined(const std::vector<std::string>& parts) {
  std::string text;
  for (const std::string& part : parts) text += part;
  return text;
}

std::string compact(std::string_view text) { return joined(words(text)); }

/// Symbols in use before the e glide of 1992, in the order of the settings of each number.
/// Source: International Tables A, fourth edition (1995), Table 4.3.1.
struct OlderSymbols {
  int number;
  std::array<const char*, 6> symbols;
};
constexpr std::array<OlderSymbols, 5> older_symbols{{
    {39, {"Abm2", "Bma2", "B2cm", "C2mb", "Cm2a", "Ac2m"}},
    {41, {"Aba2", "Bba2", "B2cb", "C2cb", "Cc2a", "Ac2a"}},
    {64, {"Cmca", "Ccmb", "Abma", "Acam", "Bbcm", "Bmab"}},
    {67, {"Cmma", "Cmmb", "Abmm", "Acmm", "Bmcm", "Bmam"}},
    {68, {"Ccca", "Cccb", "Abaa", "Acaa", "Bbcb", "Bbab"}},
}};

std::string without(std::string text, std::string_view part) {
  const std::size_t found = text.find(part);
  if (found != std::string::npos) text.erase(found, part.size());
  return text;
}

std::vector<std::vector<std::string>> spaced_forms(const HallSetting& hall) {
  std::vector<std::vector<std::string>> forms{words(hall.symbol_full), words(hall.symbol_short)};
  if (hall.number >= 3 && hall.number <= 15) {
    // "P 1 1 2_1/b" is also written "P 2_1/b".
    forms.push_back(words(hall.symbol_full));
    std::erase(forms.back(), "1");
  }
  return forms;
}

std::vector<std::string> compact_forms(const HallSetting& hall) {
  std::vector<std::string> forms;
  for (const std::vector<std::string>& form : spaced_forms(hall)) forms.push_back(joined(form));
  for (const OlderSymbols& older : older_symbols)
    if (older.number == hall.number) {
      const int step = hall.number == 68 ? 2 : 1;  // Two origins for each setting of No. 68.
      const int first = first_hall_numbers()[static_cast<std::size_t>(hall.number - 1)];
      forms.push_back(
          compact(older.symbols[static_cast<std::size_t>((hall.hall_number - first) / step)]));
    }
  const bool cubic_with_bar = (hall.number >= 200 && hall.number <= 206) || hall.number >= 221;
  if (cubic_with_bar) {
    std::string plain = compact(hall.symbol_short);  // "P m 3 m" for "P m -3 m".
    forms.push_back(without(plain, "-"));
  }
  return forms;
}

std::vector<Setting> read_settings() {
  std::vector<Setting> result;
  for (int hall_number = 1; hall_number <= 530; ++hall_number) {
    HallSetting hall = hall_setting(hall_number);
    std::vector<std::string> forms = compact_forms(hall);
    std::vector<std::vector<std::string>> spaced = spaced_forms(hall);
    result.push_back({std::move(hall), std::move(forms), std::move(spaced)});
  }
  return result;
}

const std::vector<Setting>& all_settings() {
  static const std::vector<Setting> settings = read_settings();
  return settings;
}

/// Smaller for the setting that International Tables A calls standard: origin 2, hexagonal axes,
/// unique axis b, cell choice 1, unpermuted axes.
std::tuple<bool, int, int> rank(const HallSetting& hall) {
  const std::string& choice = hall.choice;
  const bool other_origin_or_axes = !choice.empty() && (choice[0] == '1' || choice == "R");
  int axis = 0;
  if (hall.number >= 3 && hall.number <= 15) {
    if (choice.find('c') != std::string::npos) axis = 1;
    if (choice.find('a') != std::string::npos) axis = 2;
  }
  return {other_origin_or_axes, axis, hall.hall_number};
}

/// True when the suffix names the choice, in whole ("b1", "2cab") or for its leading part: origin
/// 1 or 2 in any axes, a unique axis in any cell choice, axes with origin 2.
bool suffix_names(const std::string& suffix, const HallSetting& hall) {
  const std::string choice = compact(hall.choice);
  if (suffix == choice || suffix.empty()) return true;
  if (suffix == "1" || suffix == "2") return choice.starts_with(suffix);
  if (suffix == "a" || suffix == "b" || suffix == "c")
    return hall.number <= 15 && choice.starts_with(suffix);
  return choice == "2" + suffix;
}

std::string display(const HallSetting& hall) {
  const std::string& choice = hall.choice;
  const bool marked = choice == "R" || (!choice.empty() && choice[0] == '1');
  return "'" + hall.symbol_short + (marked ? ":" + choice.substr(0, 1) : "") + "'";
}

std::size_t edit_distance(const std::string& a, const std::string& b) {
  std::vector<std::size_t> row(b.size() + 1);
  for (std::size_t j = 0; j <= b.size(); ++j) row[j] = j;
  for (std::size_t i = 1; i <= a.size(); ++i) {
    std::size_t diagonal = row[0];
    row[0] = i;
    for (std::size_t j = 1; j <= b.size(); ++j) {
      const std::size_t above = row[j];
      row[j] = std::min({above + 1, row[j - 1] + 1, diagonal + (a[i - 1] == b[j - 1] ? 0U : 1U)});
      diagonal = above;
    }
  }
  return row[b.size()];
}

Error unknown_symbol(std::string_view text, const std::string& symbol,
                     const std::vector<Setting>& settings) {
  std::vector<std::tuple<std::size_t, bool, int, std::string>> near;
  for (const Setting& setting : settings) {
    std::size_t distance = symbol.size() + 10;
    for (const std::string& form : setting.forms)
      distance = std::min(distance, edit_distance(symbol, form));
    const int hall_number = setting.hall.hall_number;
    const bool other_setting = standard_hall_number(setting.hall.number) != hall_number;
    near.emplace_back(distance, other_setting, hall_number, display(setting.hall));
  }
  std::sort(near.begin(), near.end());
  std::vector<std::string> names;
  for (const auto& entry : near) {
    const std::string& name = std::get<3>(entry);
    if (names.size() < 3 && std::find(names.begin(), names.end(), name) == names.end())
      names.push_back(name);
  }
  return Error("'" + std::string(text) + "' is no known space group; the nearest symbols are " +
               names[0] + ", " + names[1] + ", " + names[2] +
               "; accepted are a number 1 to 230, a Hermann-Mauguin or a Hall symbol");
}

struct Written {
  std::string symbol;  ///< Compacted.
  std::string suffix;  ///< Compacted, without ':'.
};

/// Splits off ":2", ":H" and, as a separate last word, "H", "R" (axes), "S", "Z" (origin 1, 2).
Written split(std::string_view text) {
  const std::size_t colon = text.find(':');
  if (colon != std::string_view::npos)
    return {compact(text.substr(0, colon)), compact(text.substr(colon + 1))};
  const std::vector<std::string> parts = words(text);
  if (parts.size() > 1) {
    const std::string& last = parts.back();
    const std::string symbol = compact(text.substr(0, text.find_last_not_of(" \t")));
    if (last == "h" || last == "r") return {symbol, last};
    if (last == "s" || last == "z") return {symbol, last == "s" ? "1" : "2"};
  }
  return {compact(text), ""};
}

bool is_number(const std::string& text) {
  return !text.empty() && std::all_of(text.begin(), text.end(),
                                      [](unsigned char c) { return std::isdigit(c) != 0; });
}

std::optional<int> hall_number_of(std::string_view text, const std::vector<Setting>& settings) {
  const std::vector<std::string> wanted = words(text);
  for (const Setting& setting : settings)
    if (words(setting.hall.hall_symbol) == wanted) return setting.hall.hall_number;
  return std::nullopt;
}

/// True for a Hermann-Mauguin symbol word by word: "P 42", while "P 4 2" is the Hall symbol of
/// P 4 2 2.
bool is_spaced_symbol(std::string_view text, const std::vector<Setting>& settings) {
  const std::vector<std::string> wanted = words(text);
  return std::any_of(settings.begin(), settings.end(), [&wanted](const Setting& setting) {
    return std::find(setting.words.begin(), setting.words.end(), wanted) != setting.words.end();
  });
}

}  // namespace

SpaceGroup parse_space_group(std::string_view text) {
  const Written written = split(text);
  if (written.symbol.empty())
    throw Error("'" + std::string(text) +
                "' names no space group; accepted are a number 1 to 230, a Hermann-Mauguin or a "
                "Hall symbol");
  const std::vector<Setting>& settings = all_settings();
  int number = 0;
  if (is_number(written.symbol)) {
    number = written.symbol.size() > 3 ? 1000 : std::stoi(written.symbol);
    if (number < 1 || number > 230)
      throw Error("space-group number " + written.symbol + "; it must lie within 1 to 230");
  }
  const auto hall_number = hall_number_of(text, settings);
  if (hall_number && !is_spaced_symbol(text, settings))
    return SpaceGroup::from_hall_number(*hall_number);
  std::vector<const HallSetting*> candidates;
  for (const Setting& setting : settings)
    if (setting.hall.number == number ||
        (number == 0 && std::find(setting.forms.begin(), setting.forms.end(), written.symbol) !=
                            setting.forms.end()))
      candidates.push_back(&setting.hall);
  if (candidates.empty()) throw unknown_symbol(text, written.symbol, settings);
  std::vector<const HallSetting*> chosen;
  std::copy_if(candidates.begin(), candidates.end(), std::back_inserter(chosen),
               [&written](const HallSetting* hall) { return suffix_names(written.suffix, *hall); });
  const auto by_rank = [](const HallSetting* a, const HallSetting* b) {
    return rank(*a) < rank(*b);
  };
  if (!chosen.empty())
    return SpaceGroup::from_hall_number(
        (*std::min_element(chosen.begin(), chosen.end(), by_rank))->hall_number);
  std::string known;
  for (const HallSetting* hall : candidates)
    if (!hall->choice.empty()) known += (known.empty() ? ":" : ", :") + hall->choice;
  throw Error("'" + std::string(text) + "' has no setting ':" + written.suffix + "'; " +
              (known.empty() ? "this symbol takes no suffix" : "accepted are " + known));
}

SpaceGroup parse_hall_symbol(std::string_view text) {
  if (const auto hall_number = hall_number_of(text, all_settings()))
    return SpaceGroup::from_hall_number(*hall_number);
  throw Error("'" + std::string(text) +
              "' is not among the 530 tabulated Hall symbols; accepted are for example -P 2ac 2n");
}

}  // namespace spinsieve
