#include "server/api/csv_documents.h"

#include "server/base/file_unit.h"
#include "server/base/json_fields.h"
#include "server/base/time_text.h"
#include "server/ingest/csv_mapping_json.h"

namespace hearthfront::server {
namespace {

Json text_or_null(const std::string& text) {
  return text.empty() ? Json(nullptr) : Json(text);
}

Json time_or_null(const std::optional<std::int64_t>& time_us) {
  return time_us ? Json(format_time(*time_us)) : Json(nullptr);
}

Json number_or_null(const std::optional<double>& value) {
  return value ? Json(*value) : Json(nullptr);
}

std::string_view text(CsvPreview::Use use) {
  switch (use) {
    case CsvPreview::Use::unused:
      return "unused";
    case CsvPreview::Use::time:
      return "time";
    case CsvPreview::Use::date:
      return "date";
    case CsvPreview::Use::channel:
      return "channel";
  }
  return "unused";
}

std::string_view text(CsvCell::State state) {
  switch (state) {
    case CsvCell::State::value:
      return "value";
    case CsvCell::State::empty:
      return "empty";
    case CsvCell::State::no_value:
      return "no value";
    case CsvCell::State::refused:
      return "refused";
  }
  return "refused";
}

Json column_document(const CsvPreview::Column& column) {
  return {{"column", column.column},
          {"use", text(column.use)},
          {"channel", text_or_null(column.channel)},
          {"unit_in_file", column.unit_in_file ? Json(server::text(*column.unit_in_file)) : Json(nullptr)},
          {"unit", column.unit ? Json(server::text(*column.unit)) : Json(nullptr)}};
}

Json row_document(const CsvPreview::Row& row, const std::vector<CsvPreview::Summary>& channels) {
  Json values = Json::array();
  for (std::size_t i = 0; i < row.values.size(); ++i) {
    const CsvCell& cell = row.values[i];
    const bool is_value = cell.state == CsvCell::State::value;
    values.push_back({{"channel", channels[i].channel->name},
                      {"state", text(cell.state)},
                      {"value", is_value ? Json(cell.value) : Json(nullptr)},
                      {"reason", text_or_null(cell.reason)}});
  }
  return {{"line", row.line},
          {"cells", row.cells},
          {"time", time_or_null(row.time_us)},
          {"local", text_or_null(row.local)},
          {"reason", text_or_null(row.reason)},
          {"values", std::move(values)}};
}

Json totals_document(const CsvPreview& preview) {
  Json reasons = Json::object(), words = Json::object();
  for (const auto& [refusal, count] : preview.refused_by_reason)
    reasons[std::string(server::text(refusal))] = count;
  for (const auto& [word, count] : preview.no_value_by_text) words[word] = count;
  return {{"rows", preview.row_count},
          {"readings", preview.readings},
          {"refused", preview.refused},
          {"no_value", preview.no_value},
          {"repeated_headers", preview.repeated_headers},
          {"refused_by_reason", std::move(reasons)},
          {"no_value_by_text", std::move(words)},
          {"first", time_or_null(preview.first_us)},
          {"last", time_or_null(preview.last_us)},
          {"interval_s", number_or_null(preview.interval_s)}};
}

Json preview_document(const CsvPreview& preview) {
  Json problem = nullptr;
  if (preview.fault)
    problem = {{"line", preview.fault->line > 0 ? Json(preview.fault->line) : Json(nullptr)},
               {"text", preview.fault->text}};
  Json lines = Json::array(), columns = Json::array(), rows = Json::array(), channels = Json::array(),
       problems = Json::array(), warnings = Json::array();
  for (const auto& line : preview.raw_lines) lines.push_back({{"line", line.line}, {"text", line.text}});
  for (const auto& column : preview.columns) columns.push_back(column_document(column));
  for (const auto& row : preview.rows) rows.push_back(row_document(row, preview.channels));
  for (const auto& each : preview.channels)
    channels.push_back({{"channel", each.channel->name},
                        {"unit", server::text(each.channel->unit)},
                        {"readings", each.readings},
                        {"refused", each.refused},
                        {"no_value", each.no_value},
                        {"lowest", number_or_null(each.lowest)},
                        {"highest", number_or_null(each.highest)}});
  for (const auto& each : preview.problems)
    problems.push_back({{"line", each.line}, {"reason", each.reason}});
  for (const auto& each : preview.warnings) warnings.push_back({{"kind", each.kind}, {"text", each.text}});
  return {{"fits", !preview.fault},
          {"problem", std::move(problem)},
          {"encoding", server::text(preview.encoding)},
          {"raw_lines", std::move(lines)},
          {"header", preview.header},
          {"units", preview.units},
          {"columns", std::move(columns)},
          {"rows", std::move(rows)},
          {"totals", totals_document(preview)},
          {"channels", std::move(channels)},
          {"problems", std::move(problems)},
          {"warnings", std::move(warnings)}};
}

Json mapping_document(const KnownMapping& known) {
  const auto& saved = known.saved;
  // A saved one that no longer fits the furnace is shown as it was saved, to be mended.
  const std::string mapping = known.fault.empty() ? csv_mapping_json(known.mapping) : saved.value().json;
  return {{"name", known.mapping.name},
          {"source", saved ? "library" : "plant file"},
          {"replaces_plant_file", known.replaces_plant_file},
          {"version", saved ? Json(saved->version) : Json(nullptr)},
          {"at", saved ? Json(format_time(saved->at_us)) : Json(nullptr)},
          {"person", saved ? Json(saved->person) : Json(nullptr)},
          {"mapping", Json::parse(mapping)},
          {"fault", text_or_null(known.fault)}};
}

}  // namespace

std::string preview_json(const CsvPreview& preview) {
  return dumped(preview_document(preview));
}

std::string guess_json(const CsvGuess& guess, const CsvPreview& preview) {
  Json unsure = Json::array();
  for (const Unsure& each : guess.unsure) unsure.push_back({{"field", each.field}, {"text", each.text}});
  return dumped({{"mapping", Json::parse(csv_mapping_json(guess.mapping))},
                 {"unsure", std::move(unsure)},
                 {"preview", preview_document(preview)}});
}

std::string mapping_json(const KnownMapping& known) {
  return dumped(mapping_document(known));
}

std::string mappings_json(const std::vector<KnownMapping>& known) {
  Json mappings = Json::array();
  for (const KnownMapping& each : known) mappings.push_back(mapping_document(each));
  return dumped({{"mappings", std::move(mappings)}});
}

}  // namespace hearthfront::server
