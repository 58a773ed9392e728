// Documents of one load: snapshot, history.
#include "server/api/document_parts.h"
#include "server/api/documents.h"
#include "server/api/documents_outlook.h"
#include "server/base/time_text.h"
#include "server/live/result_fields.h"

namespace hearthfront::server {
namespace {

Json place_json(const LoadView& view) {
  const LoadDefinition& load = *view.result.definition;
  const PathStep& place = load.place_at(view.result.state_us);
  if (place.outside()) return nullptr;
  const Furnace& furnace = *load.furnace(place.furnace);
  return {{"furnace", furnace.id},
          {"furnace_name", furnace.name},
          {"chamber", place.chamber},
          {"chamber_name", furnace.chamber(place.chamber)->name},
          {"since", format_time(place.from_us)},
          {"position", position_json(view, furnace)}};
}

Json path_json(const LoadDefinition& load) {
  Json path = Json::array();
  for (std::size_t i = 0; i < load.path.size(); ++i) {
    const PathStep& step = load.path[i];
    Json json{{"from", format_time(step.from_us)}, {"to", time_or_null(load.until_us(i))}};
    if (step.outside()) {
      json["outside"] = true;
    } else {
      const Furnace& furnace = *load.furnace(step.furnace);
      json.update({{"furnace", furnace.id},
                   {"furnace_name", furnace.name},
                   {"chamber", step.chamber},
                   {"chamber_name", furnace.chamber(step.chamber)->name}});
    }
    path.push_back(std::move(json));
  }
  return path;
}

std::string furnace_name(const LoadDefinition& load, const std::string& id) {
  const Furnace* furnace = load.furnace(id);
  return furnace ? furnace->name : id;
}

}  // namespace

std::string snapshot_json(const LoadView& view, const std::vector<storage::LoadNote>& notes,
                          const AlertList& alerts) {
  const LoadDefinition& load = *view.result.definition;
  Json shift_notes = Json::array();
  for (const storage::LoadNote& note : notes)
    shift_notes.push_back({{"at", format_time(note.at_us)}, {"person", note.person}, {"text", note.text}});
  const Json json{
      {"load",
       {{"id", view.row.id},
        {"name", view.row.name},
        {"furnace", view.row.furnace},
        {"furnace_name", furnace_name(load, view.row.furnace)},
        {"chamber", view.row.chamber},
        {"path", path_json(load)},
        {"person", view.row.person},
        {"started_at", format_time(view.row.started_us)},
        {"ended_at", time_or_null(view.row.ended_us)},
        {"state", state_of(view.row)},
        {"model_version", load.model_version},
        {"recipe", recipe_json(load.recipe)},
        {"revision", view.row.revision}}},
      {"sequence", view.sequence},
      {"now", format_time(view.now_us)},
      {"data_time", time_or_null(view.data_us)},
      {"data_age_s", age_or_null(view.data_us, view.now_us)},
      {"state_time", format_time(view.result.state_us)},
      {"condition", text(view.condition)},
      {"message", view.message.empty() ? Json(nullptr) : Json(view.message)},
      {"band", band_words(view.result)},
      {"outlook", outlook_or_null(view)},
      {"outlook_missing", view.outlook_missing.empty() ? Json(nullptr) : Json(view.outlook_missing)},
      {"rest", view.outlook ? rest_json(view.outlook->rest) : Json(nullptr)},
      {"plans", adopted_plans_json(load)},
      {"place", place_json(view)},
      {"inputs", inputs_json(view)},
      {"segment", segment_json(view)},
      {"minutes_left", view.minutes_left},
      {"items", result_items_json(view.result)},
      {"controlling_item", load.items[controlling_item(view)].name},
      {"notes", result_notes_json(view.result)},
      {"gaps", result_gaps_json(view.result)},
      {"shift_notes", std::move(shift_notes)},
      {"alerts", load_alerts_json(alerts, view.row.id, view.row.ended_us ? "" : view.row.furnace)}};
  return dumped(json);
}

std::string history_json(const LoadView& view) {
  const History& history = *view.history;
  const auto or_null = [](const std::vector<std::optional<double>>& values) {
    Json list = Json::array();
    for (const auto& value : values) list.push_back(number_or_null(value));
    return list;
  };
  const auto words = [](const std::vector<Basis>& bases) {
    Json list = Json::array();
    for (const Basis basis : bases) list.push_back(text(basis));
    return list;
  };
  Json items = Json::array();
  for (const auto& columns : history.items) {
    items.push_back({{"name", columns.name},
                     {"case_depth_mm", or_null(columns.case_depth_mm)},
                     {"case_depth_low_mm", or_null(columns.case_depth_low_mm)},
                     {"case_depth_high_mm", or_null(columns.case_depth_high_mm)},
                     {"surface_carbon_wt_pct", columns.surface_carbon_wt_pct},
                     {"part_temperature_degc", columns.part_temperature_degc}});
  }
  const Json json{{"time_s", history.time_s},
                  {"temperature_degc", history.temperature_degc},
                  {"temperature_basis", words(history.temperature_basis)},
                  {"carbon_potential_wt_pct", history.carbon_potential_wt_pct},
                  {"carbon_potential_basis", words(history.carbon_potential_basis)},
                  {"items", std::move(items)},
                  {"outlook", outlook_course_json(view)}};
  return json.dump();
}

}  // namespace hearthfront::server
