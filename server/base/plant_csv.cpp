// [[furnace.csv]] of the plant file; what its values mean together is checked in csv_mapping.cpp.
#include "server/base/file_unit.h"
#include "server/base/nearest.h"
#include "server/base/plant_parts.h"

namespace hearthfront::server {
namespace {

void read_unit(ConfigTable& table, CsvColumn& column) {
  std::string word;
  if (!table.text("unit", word)) return;
  column.unit_from_header = word == "from header";
  if (column.unit_from_header) return;
  column.unit = file_unit_from(word);
  if (!column.unit) {
    table.fault("unit", "\"" + word + "\" is no unit of a logger file; expected \"from header\", " +
                            all_file_units());
  }
}

bool read_column(ConfigTable& table, CsvColumn& column) {
  table.require("column", "it is the header text of the column, or \"#3\" for the third");
  table.require("channel", "it says where the values go");
  const bool named = table.text("column", column.column, 1, 100);
  const bool aimed = table.text("channel", column.channel);
  read_unit(table, column);
  table.number("factor", column.factor, -1e9, 1e9);
  table.finish();
  return named && aimed;
}

void read_signs(ConfigTable& table, CsvMapping& mapping) {
  std::string word;
  if (table.text("encoding", word)) {
    const auto encoding = encoding_from(word);
    if (encoding)
      mapping.encoding = *encoding;
    else
      table.fault("encoding",
                  "expected auto, utf-8, utf-16, utf-16-le, utf-16-be, windows-1252 or iso-8859-1");
  }
  if (table.raw_text("separator", word) && !read_separator(word, mapping))
    table.fault("separator", "expected \",\", \";\", \"|\", \"\\t\", \"spaces\" or \"wide_spaces\"");
  if (table.text("decimal", word, 0)) {
    if (word == "." || word == ",")
      mapping.decimal = word.front();
    else
      table.fault("decimal", "expected \".\" or \",\"");
  }
  if (table.text("thousands", word, 0) && !word.empty()) {
    if (word.size() == 1 && std::string_view(".,' ").find(word) != std::string_view::npos)
      mapping.thousands = word.front();
    else
      table.fault("thousands", "expected \".\", \",\", \"'\" or \" \"");
  }
  table.text("comment", mapping.comment, 0, 5);
  table.texts("no_value", mapping.no_value, 100, 40);
}

void read_times(ConfigTable& table, CsvMapping& mapping) {
  std::int64_t number = mapping.header_lines;
  if (table.integer("header_lines", number, 0, 100)) mapping.header_lines = static_cast<int>(number);
  table.boolean("units_line", mapping.units_line);
  number = mapping.utc_offset_min;
  if (table.integer("utc_offset_min", number, -720, 840)) mapping.utc_offset_min = static_cast<int>(number);
  table.text("time_zone", mapping.time_zone, 0, 60);
  table.text("time_column", mapping.time_column, 1, 100);
  table.text("date_column", mapping.date_column, 1, 100);
  table.text("time_format", mapping.time_format, 1, 100);
}

}  // namespace

CsvMapping read_csv_mapping(ConfigTable& table, const Furnace& furnace) {
  CsvMapping mapping;
  table.require("name", "an upload names the mapping by it");
  table.require("time_column", "without it readings have no time");
  table.require("columns", "it says which column feeds which channel");
  read_id(table, "name", mapping.name);
  read_signs(table, mapping);
  read_times(table, mapping);
  std::vector<ConfigTable> tables = table.tables("columns"), kept;
  if (table.has_empty_array("columns")) table.fault("columns", "expected at least one {column, channel}");
  for (ConfigTable& each : tables) {
    CsvColumn column;
    if (!read_column(each, column)) continue;
    mapping.columns.push_back(std::move(column));
    kept.push_back(each);
  }
  for (const MappingFault& fault : mapping_faults(mapping, furnace)) {
    ConfigTable& at = fault.column < 0 ? table : kept[static_cast<std::size_t>(fault.column)];
    at.fault(fault.key, fault.reason);
  }
  return mapping;
}

}  // namespace hearthfront::server
