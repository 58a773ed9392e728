// Documents of what is stored: loads, furnaces with their channels, steels, readings.
#include <algorithm>

#include "server/api/document_parts.h"
#include "server/api/documents.h"
#include "server/base/time_text.h"
#include "server/live/result_fields.h"
#include "solver/material/alloy.h"

namespace hearthfront::server {
namespace {

Json row_json(const storage::LoadRow& row) {
  return {{"id", row.id},
          {"name", row.name},
          {"furnace", row.furnace},
          {"chamber", row.chamber},
          {"person", row.person},
          {"started_at", format_time(row.started_us)},
          {"ended_at", row.ended_us ? Json(format_time(*row.ended_us)) : Json(nullptr)},
          {"state", state_of(row)},
          {"created_at", format_time(row.created_us)},
          {"revision", row.revision}};
}

Json channel_document(const ChannelState& state, std::int64_t now_us) {
  Json last = nullptr;
  if (const auto& reading = state.counts.last)
    last = {{"time", format_time(reading->time_us)},
            {"value", reading->value},
            {"age_s", static_cast<double>(now_us - reading->time_us) * 1e-6}};
  Json refused = Json::object();
  for (const auto& [reason, count] : state.counts.refused) refused[reason] = count;
  Json json = channel_json(*state.channel);
  json["last"] = std::move(last);
  json["stored"] = state.counts.stored;
  json["conflicts"] = state.counts.conflicts;
  json["undecided"] = state.counts.conflicts - state.counts.chosen;
  json["typical_interval_s"] = number_or_null(state.health.typical_interval_s);
  json["health"] = {
      {"state", text(state.health.health)},
      {"sentence", state.health.sentence},
      {"since", state.health.since_us ? Json(format_time(*state.health.since_us)) : Json(nullptr)}};
  json["refused"] = std::move(refused);
  return json;
}

Json furnace_document(const FurnaceState& state, std::int64_t now_us) {
  const Furnace& furnace = *state.furnace;
  Json mappings = Json::array(), channels = Json::array();
  for (const CsvMapping& mapping : furnace.csv_mappings) mappings.push_back(mapping.name);
  for (const ChannelState& channel : state.channels) channels.push_back(channel_document(channel, now_us));
  return {{"id", furnace.id},
          {"name", furnace.name},
          {"process", furnace.process},
          {"line", furnace.line},
          {"chambers", chambers_json(furnace)},
          {"atmosphere",
           {{"co_fraction", furnace.co_fraction},
            {"h2_fraction", furnace.h2_fraction},
            {"beta_m_per_s", number_or_null(furnace.beta_m_per_s)}}},
          {"diffusivity", furnace.diffusivity},
          {"lag_min", furnace.lag_min},
          {"csv_mappings", std::move(mappings)},
          {"channels", std::move(channels)},
          {"open_loads", state.open_loads}};
}

}  // namespace

std::string load_json(const storage::LoadRow& row, const LoadDefinition& definition) {
  Json json = row_json(row);
  json["model_version"] = definition.model_version;
  json["definition"] = load_body_json(definition);
  return dumped(json);
}

std::string loads_json(const std::vector<storage::LoadRow>& rows, std::optional<std::int64_t> next_cursor) {
  Json loads = Json::array();
  for (const storage::LoadRow& row : rows) loads.push_back(row_json(row));
  return dumped(
      {{"loads", std::move(loads)}, {"next_cursor", next_cursor ? Json(*next_cursor) : Json(nullptr)}});
}

std::string steels_json(const Plant& plant) {
  Json steels = Json::array();
  for (const SteelEntry& entry : plant.steels) {
    const auto& c = entry.steel.composition;
    steels.push_back({{"id", entry.steel.name},
                      {"standard", entry.standard},
                      {"number", entry.number},
                      {"note", entry.note},
                      {"composition_wt_pct", composition_json(c)},
                      {"alloy_factor_k", solver::alloy_factor_k(c)},
                      {"diffusivity_factor", solver::diffusivity_factor(c)},
                      {"austenite_above_degc", solver::ae3_degc(c, c.c_wt_pct)}});
  }
  return dumped({{"steels", std::move(steels)}});
}

std::string furnace_json(const FurnaceState& state, std::int64_t now_us) {
  return dumped(furnace_document(state, now_us));
}

std::string furnaces_json(const std::vector<FurnaceState>& states, std::int64_t now_us) {
  Json furnaces = Json::array();
  for (const FurnaceState& state : states) furnaces.push_back(furnace_document(state, now_us));
  return dumped({{"furnaces", std::move(furnaces)}});
}

std::string readings_json(const std::string& channel, Unit unit,
                          const std::vector<storage::Reading>& readings, std::size_t max_points) {
  const std::size_t stride = std::max<std::size_t>(1, (readings.size() + max_points - 1) / max_points);
  Json time = Json::array(), value = Json::array();
  for (std::size_t i = 0; i < readings.size(); i += stride) {
    time.push_back(static_cast<double>(readings[i].time_us) * 1e-6);
    value.push_back(readings[i].value);
  }
  return dumped(
      {{"channel", channel}, {"unit", text(unit)}, {"time_s", std::move(time)}, {"value", std::move(value)}});
}

}  // namespace hearthfront::server
