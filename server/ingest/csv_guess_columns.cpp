// guess_signs and guess_columns (csv_guess_parts.h): how numbers are written, and which column feeds which
// channel.
#include <algorithm>
#include <cmath>
#include <set>

#include "server/base/file_unit.h"
#include "server/ingest/csv_guess_parts.h"
#include "server/ingest/csv_number.h"
#include "server/ingest/csv_text.h"

namespace hearthfront::server {
namespace {

constexpr int good_score = 50, least_score = 25, close_score = 10;

bool is_digit(char c) {
  return c >= '0' && c <= '9';
}

// How often a sign can only be the decimal sign, only a grouping sign, or either ("1,050").
struct Signs {
  std::size_t decimal = 0, grouping = 0, either = 0;
};

void count_sign(const std::string& cell, char sign, char other, Signs& signs) {
  const std::size_t first = cell.find(sign), last = cell.rfind(sign);
  if (first == std::string::npos) return;
  const std::size_t behind = cell.size() - last - 1;
  const std::size_t other_at = cell.rfind(other);
  if (first != last || (other_at != std::string::npos && other_at > last))
    ++signs.grouping;
  else if (behind != 3 || first == 0 || first > 3 || other_at != std::string::npos || cell.front() == '0')
    ++signs.decimal;
  else
    ++signs.either;
}

// Digits, signs between them, a leading plus or minus cut off; empty where the cell is something else.
std::string number_body(std::string cell) {
  if (!cell.empty() && (cell.front() == '-' || cell.front() == '+')) cell.erase(0, 1);
  const bool numeric = !cell.empty() && std::any_of(cell.begin(), cell.end(), is_digit) &&
                       cell.find_first_not_of("0123456789.,' ") == std::string::npos;
  return numeric ? cell : std::string{};
}

bool is_time(const std::vector<std::size_t>& time_columns, std::size_t index) {
  return std::find(time_columns.begin(), time_columns.end(), index) != time_columns.end();
}

// Lower-case words of a name, digits at the end of a word cut: "TC1 Zone_2" gives tc, zone. "co2" stays.
std::set<std::string> words_of(std::string_view name) {
  std::set<std::string> words;
  std::string word;
  const auto close = [&] {
    while (word != "co2" && word != "o2" && word != "h2" && word != "ch4" && !word.empty() &&
           is_digit(word.back()))
      word.pop_back();
    if (!word.empty()) words.insert(word);
    word.clear();
  };
  for (const char c : name) {
    const bool letter = (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || is_digit(c) ||
                        static_cast<unsigned char>(c) >= 0x80;
    if (letter)
      word += c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
    else
      close();
  }
  close();
  return words;
}

bool any_of_words(const std::set<std::string>& words, std::initializer_list<const char*> list) {
  return std::any_of(list.begin(), list.end(), [&](const char* word) { return words.contains(word); });
}

// Words of the trade in English and German; common practice, no source.
bool speaks_of(const std::set<std::string>& words, Role role) {
  switch (role) {
    case Role::temperature:
      return any_of_words(words, {"temp", "temperature", "temperatur", "furnace", "ofen", "ofentemperatur",
                                  "tc", "zone", "control", "chamber", "kammer"});
    case Role::load_temperature:
      return any_of_words(words,
                          {"load", "charge", "part", "core", "workpiece", "werkstück", "chargentemperatur"});
    case Role::probe_temperature:
      return any_of_words(words, {"probe", "sonde", "sondentemperatur"});
    case Role::probe_emf:
      return any_of_words(words, {"emf", "mv", "probe", "sonde", "sondenspannung", "o2", "sensor"});
    case Role::carbon_potential:
      return any_of_words(words,
                          {"cp", "cpot", "pot", "potential", "carbon", "kohlenstoff", "pegel", "cpegel"});
    case Role::co:
      return any_of_words(words, {"co", "kohlenmonoxid"});
    case Role::h2:
      return any_of_words(words, {"h2", "hydrogen", "wasserstoff"});
    case Role::co2:
      return any_of_words(words, {"co2", "kohlendioxid"});
    case Role::dew_point:
      return any_of_words(words, {"dew", "dewpoint", "taupunkt"});
    case Role::pressure:
      return any_of_words(words, {"pressure", "druck", "ofendruck"});
    case Role::push:
      return any_of_words(words, {"push", "pushes", "pusher", "takt"});
  }
  return false;
}

// A gas or a pressure is never another one's channel, whatever the unit.
bool speaks_of_another(const std::set<std::string>& words, Role role) {
  for (const Role other : {Role::co, Role::h2, Role::co2, Role::dew_point, Role::pressure, Role::push}) {
    if (other != role && speaks_of(words, other)) return true;
  }
  return false;
}

// Set points, outputs and what is measured elsewhere.
bool is_something_else(const std::set<std::string>& words) {
  return any_of_words(words, {"setpoint", "sp", "set", "soll", "sollwert", "target", "output", "out", "power",
                              "alarm", "status", "ch4", "oil", "quench", "öl"});
}

struct Column {
  std::string name, unit_cell, word;
  std::vector<double> values;
  std::size_t filled = 0;

  std::optional<FileUnit> unit_for(Role role) const {
    const auto unit = unit_in_words(unit_cell, role);
    return unit ? unit : unit_in_words(name, role);
  }
  double share_within(const Channel& channel, FileUnit unit) const {
    if (values.empty()) return 0;
    std::size_t within = 0;
    for (const double value : values) {
      const double converted = convert(value, unit, channel.unit);
      within += converted >= channel.low && converted <= channel.high ? 1 : 0;
    }
    return static_cast<double>(within) / static_cast<double>(values.size());
  }
};

struct Match {
  int score = 0;
  std::size_t column = 0;
  const Channel* channel = nullptr;
};

// The unit that makes the values plausible where none is named.
FileUnit likely_unit(const Column& column, const Channel& channel) {
  const FileUnit own = file_unit_of(channel.unit);
  double largest = 0;
  for (const double value : column.values) largest = std::max(largest, std::abs(value));
  if (channel.role == Role::probe_emf && largest < 2) return FileUnit::volt;
  if (column.share_within(channel, own) >= 0.5) return own;
  for (const FileUnit unit : {FileUnit::degf, FileUnit::degc, FileUnit::ppm}) {
    if (unit_fits(channel.role, unit) && column.share_within(channel, unit) >= 0.8) return unit;
  }
  return own;
}

int score_of(const Column& column, const Channel& channel, const Furnace& furnace) {
  if (column.values.size() * 3 < column.filled || column.values.empty()) return 0;
  const std::set<std::string> words = words_of(column.name), wanted = words_of(channel.name);
  int score = 0;
  for (const CsvMapping& other : furnace.csv_mappings) {
    for (const CsvColumn& known : other.columns)
      if (known.column == column.name && known.channel == channel.name) score = 100;
  }
  if (words == wanted)
    score += 100;
  else
    for (const std::string& word : wanted) score += words.contains(word) ? 25 : 0;
  if (speaks_of(words, channel.role)) score += 30;
  if (is_something_else(words) || speaks_of_another(words, channel.role)) score -= 80;
  const auto unit = column.unit_for(channel.role);
  if (unit) score += 20;
  if (!unit) {
    for (const Role role :
         {Role::temperature, Role::probe_emf, Role::carbon_potential, Role::co, Role::pressure})
      if (column.unit_for(role)) return 0;  // it names a unit, of something else
  }
  const double within = column.share_within(channel, unit.value_or(likely_unit(column, channel)));
  return score + (within >= 0.8 ? 10 : within < 0.2 ? -40 : 0);
}

std::vector<Column> columns_of(const std::vector<Cells>& rows, const Cells& names, const Cells& units,
                               const CsvMapping& mapping) {
  std::vector<Column> columns(rows.empty() ? 0 : rows.front().size());
  std::string reason;
  for (std::size_t i = 0; i < columns.size(); ++i) {
    Column& column = columns[i];
    column.word = column_word(names, i);
    if (i < names.size()) column.name = names[i];
    if (i < units.size()) column.unit_cell = units[i];
    for (const Cells& row : rows) {
      if (row[i].empty()) continue;
      ++column.filled;
      if (const auto value = parse_decimal(row[i], mapping.decimal, reason, mapping.thousands))
        column.values.push_back(*value);
    }
  }
  return columns;
}

// Words in a column of numbers that the usual list does not know.
void note_unknown_words(const std::vector<Cells>& rows, std::size_t index, const Column& column,
                        CsvGuess& guess) {
  std::set<std::string> unknown;
  std::string reason;
  for (const Cells& row : rows) {
    const std::string& cell = row[index];
    const auto same = [&cell](const std::string& word) {
      return word.size() == cell.size() &&
             std::equal(word.begin(), word.end(), cell.begin(),
                        [](char a, char b) { return (a | 0x20) == (b | 0x20); });
    };
    const auto& known = guess.mapping.no_value;
    if (cell.empty() || cell.size() > 40 || std::any_of(known.begin(), known.end(), same)) continue;
    if (!parse_decimal(cell, guess.mapping.decimal, reason, guess.mapping.thousands)) unknown.insert(cell);
  }
  if (unknown.empty()) return;
  guess.unsure.push_back(
      {"no_value", "Column " + quoted_text(column.word) + " holds " + quoted_text(*unknown.begin()) +
                       (unknown.size() > 1 ? " and other words" : "") +
                       ", which is no number: add it to no_value if it means that there is none."});
}

}  // namespace

void guess_signs(const std::vector<Cells>& rows, const std::vector<std::size_t>& time_columns,
                 CsvGuess& guess) {
  Signs comma, point;
  std::size_t blanks = 0, ticks = 0;
  for (const Cells& row : rows) {
    for (std::size_t i = 0; i < row.size(); ++i) {
      const std::string body = is_time(time_columns, i) ? std::string{} : number_body(row[i]);
      if (body.empty()) continue;
      if (body.find(' ') != std::string::npos) ++blanks;
      if (body.find('\'') != std::string::npos) ++ticks;
      count_sign(body, ',', '.', comma);
      count_sign(body, '.', ',', point);
    }
  }
  CsvMapping& mapping = guess.mapping;
  const bool unopposed =
      point.decimal == 0 && comma.grouping == 0 && comma.either > point.either && mapping.separator != ',';
  if (comma.decimal > point.decimal || (point.grouping > 0 && comma.either > 0) || unopposed)
    mapping.decimal = ',';
  const Signs& other = mapping.decimal == ',' ? point : comma;
  const char other_sign = mapping.decimal == ',' ? '.' : ',';
  if (other.grouping > 0 && other_sign != mapping.separator)
    mapping.thousands = other_sign;
  else if (ticks > 0)
    mapping.thousands = '\'';
  else if (blanks > 0 && mapping.separator != ' ')
    mapping.thousands = ' ';
  if (comma.decimal + point.decimal == 0 && comma.either + point.either > 0)
    guess.unsure.push_back({"decimal",
                            "Numbers such as 1,050 or 1.050 may have three decimals or a grouped thousand; "
                            "compare a value with the logger."});
  if (comma.decimal > 0 && point.decimal > 0)
    guess.unsure.push_back({"decimal", "Both \",\" and \".\" stand as decimal sign in the file."});
}

void guess_columns(const std::vector<Cells>& rows, const Cells& names, const Cells& units,
                   const std::vector<std::size_t>& time_columns, const Furnace& furnace, CsvGuess& guess) {
  const std::vector<Column> columns = columns_of(rows, names, units, guess.mapping);
  std::vector<Match> matches;
  for (std::size_t i = 0; i < columns.size(); ++i) {
    if (is_time(time_columns, i)) continue;
    for (const Channel& channel : furnace.channels) {
      const int score = score_of(columns[i], channel, furnace);
      if (score >= least_score) matches.push_back({score, i, &channel});
    }
  }
  std::stable_sort(matches.begin(), matches.end(),
                   [](const Match& a, const Match& b) { return a.score > b.score; });
  std::vector<Match> chosen;
  for (const Match& match : matches) {
    const bool taken = std::any_of(chosen.begin(), chosen.end(), [&](const Match& other) {
      return other.column == match.column || other.channel == match.channel;
    });
    if (!taken) chosen.push_back(match);
  }
  std::sort(chosen.begin(), chosen.end(), [](const Match& a, const Match& b) { return a.column < b.column; });
  for (const Match& match : chosen) {
    const std::string field = "columns[" + std::to_string(guess.mapping.columns.size()) + "]";
    const Column& column = columns[match.column];
    CsvColumn& mapped = guess.mapping.columns.emplace_back();
    mapped.column = column.word;
    mapped.channel = match.channel->name;
    const FileUnit own = file_unit_of(match.channel->unit);
    const auto named = column.unit_for(match.channel->role);
    const FileUnit unit = named.value_or(likely_unit(column, *match.channel));
    if (unit != own) mapped.unit = unit;
    if (!named && unit != own)
      guess.unsure.push_back({field + ".unit", "Column " + quoted_text(column.word) +
                                                   " names no unit; by its values it is " +
                                                   std::string(text(unit)) + "."});
    const auto rival = std::find_if(matches.begin(), matches.end(), [&](const Match& other) {
      return other.channel == match.channel && other.column != match.column &&
             other.score > match.score - close_score &&
             std::none_of(chosen.begin(), chosen.end(),
                          [&](const Match& c) { return c.column == other.column; });
    });
    if (rival != matches.end())
      guess.unsure.push_back({field, "Column " + quoted_text(columns[rival->column].word) +
                                         " may as well be channel \"" + match.channel->name + "\"."});
    else if (match.score < good_score)
      guess.unsure.push_back({field, "Whether column " + quoted_text(column.word) + " is channel \"" +
                                         match.channel->name + "\" is not certain."});
    note_unknown_words(rows, match.column, column, guess);
  }
  std::string missing;
  for (const Channel& channel : furnace.channels) {
    const bool found =
        std::any_of(chosen.begin(), chosen.end(), [&](const Match& m) { return m.channel == &channel; });
    if (!found) missing += (missing.empty() ? "" : ", ") + channel.name;
  }
  if (!missing.empty()) guess.unsure.push_back({"columns", "No column was recognised for: " + missing + "."});
}

}  // namespace hearthfront::server
