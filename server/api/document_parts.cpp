#include "server/api/document_parts.h"

#include "server/alerts/alert_json.h"

#include "server/base/time_text.h"
#include "server/live/result_fields.h"

namespace hearthfront::server {
namespace {

// The instruments of the chamber that speak for a source.
Json source_channels(const LoadDefinition& load, const PathStep& place, CarbonSource source) {
  const auto serves = [&](Role role) {
    if (role == role_of(source)) return true;
    if (source == CarbonSource::logged) return false;
    return role == Role::co || role == Role::pressure ||
           (role == Role::h2 && source == CarbonSource::dew_point) ||
           (role == Role::probe_temperature && source == CarbonSource::probe_emf);
  };
  Json names = Json::array();
  if (const Furnace* furnace = load.furnace(place.furnace))
    for (const Channel& channel : furnace->channels)
      if (channel.chamber == place.chamber && serves(channel.role)) names.push_back(channel.name);
  return names;
}

Json sources_json(const LoadView& view) {
  const LoadDefinition& load = *view.result.definition;
  const PathStep& place = load.place_at(view.result.state_us);
  Json sources = Json::array();
  for (const SourceValue& each : view.result.sources)
    sources.push_back({{"source", text(each.source)},
                       {"channels", source_channels(load, place, each.source)},
                       {"value_wt_pct", each.carbon_potential_wt_pct},
                       {"basis", text(each.basis)},
                       {"leads", each.leads}});
  return sources;
}

}  // namespace

Json time_or_null(std::optional<std::int64_t> time_us) {
  return time_us ? Json(format_time(*time_us)) : Json(nullptr);
}

Json age_or_null(std::optional<std::int64_t> time_us, std::int64_t now_us) {
  return time_us ? Json(static_cast<double>(now_us - *time_us) * 1e-6) : Json(nullptr);
}

const char* state_of(const storage::LoadRow& row) {
  return row.cancelled ? "cancelled" : row.ended_us ? "ended" : "open";
}

Json chambers_json(const Furnace& furnace) {
  Json chambers = Json::array();
  for (const Chamber& chamber : furnace.chambers)
    chambers.push_back({{"id", chamber.id}, {"name", chamber.name}, {"places", chamber.places}});
  return chambers;
}

Json inputs_json(const LoadView& view) {
  const auto input = [](const char* value_name, const InputNow& now) {
    return Json{{value_name, now.value}, {"basis", text(now.basis)}, {"age_s", number_or_null(now.age_s)}};
  };
  Json json{{"temperature", input("value_degc", view.temperature)},
            {"carbon_potential", input("value_wt_pct", view.carbon_potential)}};
  json["carbon_potential"]["source"] = carbon_source(view.result);
  json["carbon_potential"]["sources"] = sources_json(view);
  json["carbon_potential"]["disagreement_wt_pct"] = number_or_null(view.result.disagreement_wt_pct);
  json["carbon_potential"]["disagree"] = sources_disagree(view.result);
  return json;
}

Json segment_json(const LoadView& view) {
  const auto& segments = view.result.definition->recipe_of(view.segment.plan).segments;
  return {{"index", view.segment.index},
          {"name", segments[view.segment.index].name},
          {"started_at", format_time(view.segment.started_us)},
          {"by", text(view.segment.by)},
          {"elapsed_min", view.segment.elapsed_min},
          {"minutes_left", view.segment.minutes_left},
          {"long_by_min", view.segment.long_by_min},
          {"overdue", view.segment.long_by_min > 0 || view.minutes_left < 0},
          {"doubt", view.segment.doubt.empty() ? Json(nullptr) : Json(view.segment.doubt)}};
}

Json position_json(const LoadView& view, const Furnace& furnace) {
  if (!view.line_position) return nullptr;
  return {{"place", *view.line_position}, {"places", furnace.places()}};
}

Json load_alerts_json(const AlertList& alerts, std::int64_t load, const std::string& furnace) {
  Json list = Json::array();
  for (const storage::AlertRow& row : alerts.active)
    if (row.load == load || (row.load == 0 && !furnace.empty() && row.furnace == furnace))
      list.push_back(alert_summary_json(row));
  return list;
}

Json furnace_alerts_json(const AlertList& alerts, const std::string& furnace) {
  Json list = Json::array();
  for (const storage::AlertRow& row : alerts.active)
    if (row.load == 0 && row.furnace == furnace) list.push_back(alert_summary_json(row));
  return list;
}

}  // namespace hearthfront::server
