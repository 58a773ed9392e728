#include "server/base/csv_mapping.h"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <set>
#include <stdexcept>

#include "server/base/file_unit.h"
#include "server/base/nearest.h"
#include "server/base/plant.h"
#include "server/base/plant_parts.h"
#include "server/base/time_format.h"
#include "server/base/time_zone.h"

namespace hearthfront::server {
namespace {

constexpr std::array<std::pair<Encoding, std::string_view>, 7> encodings{{
    {Encoding::automatic, "auto"},
    {Encoding::utf8, "utf-8"},
    {Encoding::utf16, "utf-16"},
    {Encoding::utf16_le, "utf-16-le"},
    {Encoding::utf16_be, "utf-16-be"},
    {Encoding::windows_1252, "windows-1252"},
    {Encoding::iso_8859_1, "iso-8859-1"},
}};

class Checker {
 public:
  Checker(const CsvMapping& mapping, const Furnace& furnace) : mapping_(mapping), furnace_(furnace) {}

  std::vector<MappingFault> run() {
    check_signs();
    check_place("time_column", mapping_.time_column, "#1\" for the first");
    if (!mapping_.date_column.empty()) {
      check_place("date_column", mapping_.date_column, "#1\" for the first");
      if (mapping_.date_column == mapping_.time_column)
        add("date_column", "is the time column as well; leave it out where one column holds both");
    }
    check_time();
    check_no_value();
    if (mapping_.units_line && mapping_.header_lines == 0)
      add("units_line", "header_lines = 0: a units line stands below the line that names the columns");
    for (std::size_t i = 0; i < mapping_.columns.size(); ++i) {
      column_ = static_cast<int>(i);
      check_column(mapping_.columns[i]);
    }
    return std::move(faults_);
  }

 private:
  void add(std::string key, std::string reason) {
    faults_.push_back({column_, std::move(key), std::move(reason)});
  }

  void check_signs() {
    const char separator = mapping_.separator, decimal = mapping_.decimal, thousands = mapping_.thousands;
    if (separator == decimal) {
      add("decimal", "separator and decimal sign are the same, so a number cannot be told from two columns");
    }
    if (thousands == '\0') return;
    if (thousands == decimal) add("thousands", "is the decimal sign as well");
    if (thousands == separator) add("thousands", "is the separator as well");
  }

  void check_time() {
    const std::string& format = mapping_.time_format;
    if (const std::string fault = time_format_fault(format); !fault.empty()) add("time_format", fault);
    if (!mapping_.date_column.empty() && (format == "epoch_s" || format == "epoch_ms"))
      add("date_column", "time_format = \"" + format + "\" holds the day already");
    if (mapping_.time_zone.empty()) return;
    if (mapping_.utc_offset_min != 0)
      add("utc_offset_min", "give either time_zone or utc_offset_min, not both");
    if (!TimeZone::is_known(mapping_.time_zone)) {
      add("time_zone", "no time zone is called \"" + mapping_.time_zone + "\"" +
                           suggestion(mapping_.time_zone, TimeZone::names()) +
                           "; expected a name such as \"Europe/Berlin\" or \"America/Chicago\"");
    }
  }

  void check_no_value() {
    const auto& words = mapping_.no_value;
    if (words.size() > 100) add("no_value", "expected at most 100 words");
    if (std::any_of(words.begin(), words.end(), [](const std::string& word) { return word.size() > 40; }))
      add("no_value", "expected words of at most 40 bytes");
  }

  // Header text, or "#" and a number.
  void check_place(const std::string& key, const std::string& column, const std::string& example) {
    if (column.empty()) return;
    if (column.front() != '#') {
      if (mapping_.header_lines == 0)
        add(key, "header_lines = 0, so columns have no names; use \"" + example);
      return;
    }
    int number = 0;
    const char* last = column.data() + column.size();
    const auto [end, fault] = std::from_chars(column.data() + 1, last, number);
    if (fault != std::errc{} || end != last || number < 1 || number > 1000)
      add(key, "\"" + column + "\": expected # and a number from 1 to 1000");
  }

  void check_column(const CsvColumn& column) {
    const Channel* channel = furnace_.channel(column.channel);
    if (channel == nullptr) {
      std::vector<std::string> names;
      for (const Channel& each : furnace_.channels) names.push_back(each.name);
      add("channel",
          "the furnace has no channel \"" + column.channel + "\"" + suggestion(column.channel, names));
    } else if (column.unit && !unit_fits(channel->role, *column.unit)) {
      add("unit", std::string(text(channel->role)) + " is given in " + list_of(file_units_of(channel->role)) +
                      ", not in \"" + std::string(text(*column.unit)) + "\"");
    }
    if (!std::isfinite(column.factor) || column.factor == 0) add("factor", "must be a number other than 0");
    if (column.unit_from_header && mapping_.header_lines == 0)
      add("unit", "header_lines = 0, so there is no header to read the unit from");
    check_place("column", column.column, "#3\" for the third");
    if (channel != nullptr && !claimed_.insert(column.channel).second)
      add("channel", "\"" + column.channel + "\" is taken already");
  }

  const CsvMapping& mapping_;
  const Furnace& furnace_;
  int column_ = -1;
  std::set<std::string> claimed_;
  std::vector<MappingFault> faults_;
};

}  // namespace

std::string_view text(Encoding encoding) {
  for (const auto& [known, word] : encodings) {
    if (known == encoding) return word;
  }
  throw std::logic_error("csv_mapping: an encoding without a word");
}

std::optional<Encoding> encoding_from(std::string_view word) {
  for (const auto& [encoding, known] : encodings) {
    if (known == word) return encoding;
  }
  return {};
}

std::vector<std::string> usual_no_value() {
  return {"-",    "--",  "---",   "----",    "-----",    "*",         "***",        "****",        "*****",
          "?",    "???", "NaN",   "N/A",     "#N/A",     "n.a.",      "null",       "none",        "no data",
          "OVER", "OVR", "UNDER", "UDR",     "OVERFLOW", "UNDERFLOW", "over range", "under range", "OL",
          "+OL",  "-OL", "OPEN",  "BURNOUT", "ERR",      "ERROR",     "BAD"};
}

bool read_separator(std::string_view word, CsvMapping& into) {
  const bool blanks = word == "spaces" || word == "wide_spaces";
  if (!blanks && (word.size() != 1 || std::string_view(",;\t|").find(word) == std::string_view::npos))
    return false;
  into.separator = blanks ? ' ' : word.front();
  into.least_blanks = word == "wide_spaces" ? 2 : 1;
  return true;
}

std::string separator_word(const CsvMapping& mapping) {
  if (mapping.separator == ' ') return mapping.least_blanks == 1 ? "spaces" : "wide_spaces";
  return {mapping.separator};
}

std::vector<MappingFault> mapping_faults(const CsvMapping& mapping, const Furnace& furnace) {
  return Checker(mapping, furnace).run();
}

}  // namespace hearthfront::server
