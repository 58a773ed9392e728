// How a logger's file is read: what [[furnace.csv]] of the plant file and a mapping saved over the API say.
// Plain data and its checks; pure, any thread. The TOML reader is plant_csv.cpp, the JSON one
// server/ingest/csv_mapping_json.h; both use the same keys.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace hearthfront::server {

struct Furnace;

// Units as files write them; more than channels have (file_unit.h converts).
enum class FileUnit {
  degc,
  degf,
  kelvin,
  millivolt,
  volt,
  microvolt,
  weight_percent,
  volume_percent,
  ppm,  // by volume
  pascal,
  hectopascal,
  kilopascal,
  bar,
  count
};

enum class Encoding { automatic, utf8, utf16, utf16_le, utf16_be, windows_1252, iso_8859_1 };

std::string_view text(Encoding encoding);  // "auto", "utf-8", "utf-16", "utf-16-le", ...
std::optional<Encoding> encoding_from(std::string_view word);

struct CsvColumn {
  std::string column;  // header text, or "#3" for the third column
  std::string channel;
  std::optional<FileUnit> unit = {};  // of the file, where it differs from the channel's
  bool unit_from_header = false;      // the unit stands in the column's header or in the units line
  double factor = 1;                  // the cell times this is the value in the file's unit
};

// Words that loggers write where they have no value, over-range included. Common practice, no source.
std::vector<std::string> usual_no_value();

struct CsvMapping {
  std::string name;
  Encoding encoding = Encoding::automatic;
  char separator = ',';  // , ; | tab, or a blank: runs of blanks and tabs
  int least_blanks = 1;  // with a blank as separator: so many of them part two columns, 1 or 2
  char decimal = '.';
  char thousands = '\0';  // between groups of three digits; '\0': none
  std::string comment;    // lines that begin with it are skipped and not counted as header; empty: none
  std::string time_column;
  std::string date_column;          // empty: time_column holds the date as well
  std::string time_format = "iso";  // see time_format.h; with date_column of "<date> <time>"
  std::string time_zone;            // IANA name, of times that carry no zone; empty: utc_offset_min
  int utc_offset_min = 0;           // minutes east of Greenwich, likewise
  int header_lines = 1;             // the last of them names the columns
  bool units_line = false;          // one more line below holds the units
  std::vector<std::string> no_value = usual_no_value();  // letter case does not matter
  std::vector<CsvColumn> columns;

  int lines_above_rows() const { return header_lines + (units_line ? 1 : 0); }
};

// "," ";" "|" "\t" "spaces" "wide_spaces" to separator and least_blanks. False where it is none of them.
bool read_separator(std::string_view word, CsvMapping& into);
std::string separator_word(const CsvMapping& mapping);

// What is wrong with a mapping: the key at fault, of the mapping or of one of its columns, and the reason.
struct MappingFault {
  int column = -1;  // index in `columns`; -1: the mapping itself
  std::string key, reason;
};
std::vector<MappingFault> mapping_faults(const CsvMapping& mapping, const Furnace& furnace);

}  // namespace hearthfront::server
