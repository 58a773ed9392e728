#include "server/ingest/csv_mapping_json.h"

#include <algorithm>

#include "server/base/file_unit.h"
#include "server/base/json_fields.h"
#include "server/base/utf8.h"
#include "server/ingest/csv_text.h"

namespace hearthfront::server {
namespace {

constexpr const char* problem_type = "invalid-mapping";

bool is_id(std::string_view id) {
  const auto inside = [](char c) {
    return (c >= 'a' && c <= 'z') || (c >= '0' && c <= '9') || c == '-' || c == '_' || c == '.';
  };
  const auto ends = [](char c) { return c != '-' && c != '.'; };
  return !id.empty() && id.size() <= 40 && std::all_of(id.begin(), id.end(), inside) && ends(id.front()) &&
         ends(id.back());
}

// A string as it is: a separator may be a control character, a grouping sign a blank.
std::string raw(JsonFields& fields, std::string_view name) {
  const Json& value = fields.any(name);
  if (!value.is_string()) fields.fail(name, "expected a text in quotes.");
  return value.get<std::string>();
}

void read_signs(JsonFields& fields, CsvMapping& mapping) {
  if (fields.has("encoding")) {
    const auto encoding = encoding_from(fields.word("encoding", 40));
    if (!encoding)
      fields.fail("encoding",
                  "expected auto, utf-8, utf-16, utf-16-le, utf-16-be, windows-1252 or iso-8859-1.");
    mapping.encoding = *encoding;
  }
  if (fields.has("separator") && !read_separator(raw(fields, "separator"), mapping))
    fields.fail("separator", "expected \",\", \";\", \"|\", \"\\t\", \"spaces\" or \"wide_spaces\".");
  if (fields.has("decimal")) {
    const std::string sign = raw(fields, "decimal");
    if (sign != "." && sign != ",") fields.fail("decimal", "expected \".\" or \",\".");
    mapping.decimal = sign.front();
  }
  if (fields.has("thousands")) {
    const std::string sign = raw(fields, "thousands");
    if (sign.size() != 1 || std::string_view(".,' ").find(sign) == std::string_view::npos)
      fields.fail("thousands", "expected \".\", \",\", \"'\" or \" \".");
    mapping.thousands = sign.front();
  }
  if (fields.has("comment")) mapping.comment = fields.word("comment", 5);
  if (fields.has("no_value")) {
    mapping.no_value.clear();
    for (const Json& word : fields.array("no_value", 0, 100)) {
      if (!word.is_string()) fields.fail("no_value", "expected texts in quotes.");
      mapping.no_value.push_back(word.get<std::string>());
    }
  }
}

void read_times(JsonFields& fields, CsvMapping& mapping) {
  if (fields.has("header_lines")) mapping.header_lines = fields.integer("header_lines", 0, 100);
  if (fields.has("units_line")) mapping.units_line = fields.flag("units_line");
  mapping.time_column = plain_name(fields.word("time_column", 100));
  if (fields.has("date_column")) mapping.date_column = plain_name(fields.word("date_column", 100));
  if (fields.has("time_format")) mapping.time_format = fields.word("time_format", 100);
  if (fields.has("time_zone")) mapping.time_zone = fields.word("time_zone", 60);
  if (fields.has("utc_offset_min")) mapping.utc_offset_min = fields.integer("utc_offset_min", -720, 840);
}

CsvColumn read_column(const Json& json, const std::string& path) {
  JsonFields fields(json, path, problem_type);
  CsvColumn column;
  column.column = plain_name(fields.word("column", 100));
  column.channel = fields.word("channel", 40);
  if (fields.has("unit")) {
    const std::string word = fields.word("unit", 20);
    column.unit_from_header = word == "from header";
    if (!column.unit_from_header) column.unit = file_unit_from(word);
    if (!column.unit_from_header && !column.unit)
      fields.fail("unit", "expected \"from header\", " + all_file_units() + ".");
  }
  if (fields.has("factor")) column.factor = fields.number("factor", -1e9, 1e9, "");
  fields.finish();
  return column;
}

Json column_json(const CsvColumn& column) {
  Json unit = nullptr;
  if (column.unit_from_header)
    unit = "from header";
  else if (column.unit)
    unit = text(*column.unit);
  return {{"column", column.column},
          {"channel", column.channel},
          {"unit", std::move(unit)},
          {"factor", column.factor == 1 ? Json(nullptr) : Json(column.factor)}};
}

Json word_or_null(const std::string& word) {
  return word.empty() ? Json(nullptr) : Json(word);
}

}  // namespace

CsvMapping read_csv_mapping_json(std::string_view text, const Furnace& furnace, const std::string& name,
                                 const std::string& path) {
  const Json json = parse_body(text);
  JsonFields fields(json, path, problem_type);
  CsvMapping mapping;
  mapping.name = name;
  if (fields.has("name")) mapping.name = fields.word("name", 40);
  if (!mapping.name.empty() && !is_id(mapping.name))
    fields.fail("name", "may hold only a-z, 0-9 and, inside, - _ . (40 at most).");
  if (!name.empty() && mapping.name != name)
    fields.fail("name", "is not the one of the address, \"" + name + "\".");
  read_signs(fields, mapping);
  read_times(fields, mapping);
  const std::string columns_path = fields.path_of("columns");
  for (const Json& column : fields.array("columns", 1, 200)) {
    mapping.columns.push_back(
        read_column(column, columns_path + "[" + std::to_string(mapping.columns.size()) + "]"));
  }
  fields.finish();
  const auto faults = mapping_faults(mapping, furnace);
  if (faults.empty()) return mapping;
  const MappingFault& fault = faults.front();
  const std::string at = (fault.column < 0 ? path : columns_path + "[" + std::to_string(fault.column) + "]") +
                         (path.empty() && fault.column < 0 ? "" : ".") + fault.key;
  throw Problem{422, problem_type, "The value cannot be used", at + ": " + fault.reason + ".", at};
}

std::string csv_mapping_json(const CsvMapping& mapping) {
  Json json = Json::object();
  if (!mapping.name.empty()) json["name"] = mapping.name;
  json["encoding"] = text(mapping.encoding);
  json["separator"] = separator_word(mapping);
  json["decimal"] = std::string(1, mapping.decimal);
  json["thousands"] = mapping.thousands == '\0' ? Json(nullptr) : Json(std::string(1, mapping.thousands));
  json["comment"] = word_or_null(mapping.comment);
  json["header_lines"] = mapping.header_lines;
  json["units_line"] = mapping.units_line;
  json["time_column"] = mapping.time_column;
  json["date_column"] = word_or_null(mapping.date_column);
  json["time_format"] = mapping.time_format;
  json["time_zone"] = word_or_null(mapping.time_zone);
  json["utc_offset_min"] = mapping.time_zone.empty() ? Json(mapping.utc_offset_min) : Json(nullptr);
  json["no_value"] = mapping.no_value;
  Json columns = Json::array();
  for (const CsvColumn& column : mapping.columns) columns.push_back(column_json(column));
  json["columns"] = std::move(columns);
  return dumped(json);
}

}  // namespace hearthfront::server
