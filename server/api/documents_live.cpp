// Documents of what is running: floor, snapshot, history.
#include <algorithm>
#include <cmath>

#include "server/api/document_parts.h"
#include "server/api/documents.h"
#include "server/base/time_text.h"
#include "server/live/result_fields.h"

namespace hearthfront::server {
namespace {

// The floor's strip is drawn a few hundred pixels wide: more digits or points would not be seen.
constexpr std::size_t strip_points = 40;
// A line has dozens of loads; only the first few are drawn.
constexpr std::size_t strips_a_furnace = 4;

double rounded(double value) {
  return std::round(value * 1e4) / 1e4;
}

Json time_or_null(std::optional<std::int64_t> time_us) {
  return time_us ? Json(format_time(*time_us)) : Json(nullptr);
}

Json age_or_null(std::optional<std::int64_t> time_us, std::int64_t now_us) {
  return time_us ? Json(static_cast<double>(now_us - *time_us) * 1e-6) : Json(nullptr);
}

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
  const auto& segments = view.result.definition->recipe.segments;
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

// The profile thinned to the strip: every point near the surface side of the case, none beyond 3 windows.
Json strip_json(const ItemResult& item, const Item& definition) {
  const double to_mm = 2.0 * definition.case_depth_window_mm.second;
  Json depth = Json::array(), carbon = Json::array();
  const auto& x = item.profile_depth_mm;
  std::size_t next = 0;
  for (std::size_t point = 0; point < strip_points; ++point) {
    const double wanted = to_mm * static_cast<double>(point) / static_cast<double>(strip_points - 1);
    while (next + 1 < x.size() && x[next] < wanted) ++next;
    if (!depth.empty() && depth.back() >= rounded(x[next])) continue;
    depth.push_back(rounded(x[next]));
    carbon.push_back(rounded(item.profile_carbon_wt_pct[next]));
  }
  return {{"depth_mm", depth}, {"carbon_wt_pct", carbon}};
}

Json floor_item_json(const LoadView& view, bool with_strip) {
  const std::size_t i = controlling_item(view.result);
  const ItemResult& item = view.result.items[i];
  const Item& definition = view.result.definition->items[i];
  const auto& surface_window = definition.surface_carbon_window_wt_pct;
  return {{"name", definition.name},
          {"part", definition.part},
          {"steel", definition.steel.name},
          {"shape", text(definition.section.shape)},
          {"criterion", criterion_result_json(definition.criterion)},
          {"case_depth_mm", number_or_null(item.case_depth_mm)},
          {"finished_case_depth_mm", number_or_null(item.finished_case_depth_mm)},
          {"grinding_stock_mm", definition.grinding_stock_mm},
          {"case_depth_window_mm", window_json(definition.case_depth_window_mm)},
          {"surface_carbon_wt_pct", item.surface_carbon_wt_pct},
          {"surface_carbon_window_wt_pct", surface_window ? window_json(*surface_window) : Json(nullptr)},
          {"outcome", outcome_word(item.outcome)},
          {"strip", with_strip ? strip_json(item, definition) : Json(nullptr)}};
}

Json floor_load_json(const LoadView& view, const Furnace& furnace, bool with_strip) {
  return {{"id", view.row.id},
          {"name", view.row.name},
          {"chamber", view.row.chamber},
          {"position", position_json(view, furnace)},
          {"person", view.row.person},
          {"started_at", format_time(view.row.started_us)},
          {"condition", text(view.condition)},
          {"data_age_s", age_or_null(view.data_us, view.now_us)},
          {"message", view.message.empty() ? Json(nullptr) : Json(view.message)},
          {"inputs", inputs_json(view)},
          {"segment", segment_json(view)},
          {"minutes_left", view.minutes_left},
          {"item_count", view.result.items.size()},
          {"item", floor_item_json(view, with_strip)}};
}

std::string furnace_name(const LoadDefinition& load, const std::string& id) {
  const Furnace* furnace = load.furnace(id);
  return furnace ? furnace->name : id;
}

// Lower is more urgent.
int urgency(const LoadView& view) {
  if (view.condition == Condition::stale || view.condition == Condition::no_data_yet) return 0;
  if (!view.message.empty()) return 1;
  return view.minutes_left < 0 ? 2 : 3;
}

}  // namespace

const char* state_of(const storage::LoadRow& row) {
  return row.cancelled ? "cancelled" : row.ended_us ? "ended" : "open";
}

Json chambers_json(const Furnace& furnace) {
  Json chambers = Json::array();
  for (const Chamber& chamber : furnace.chambers)
    chambers.push_back({{"id", chamber.id}, {"name", chamber.name}, {"places", chamber.places}});
  return chambers;
}

std::string floor_json(const Plant& plant, const Board& board, const FloorFrame& frame) {
  const auto views = board.loads();
  struct Row {
    const Furnace* furnace;
    std::vector<const LoadView*> loads;
    int urgency = 4;
    double minutes_left = 0;
  };
  std::vector<Row> rows;
  for (const Furnace& furnace : plant.furnaces) {
    Row row{&furnace, {}, 4, 0};
    for (const auto& view : views) {
      if (view->row.furnace != furnace.id) continue;
      row.minutes_left =
          row.loads.empty() ? view->minutes_left : std::min(row.minutes_left, view->minutes_left);
      row.urgency = std::min(row.urgency, urgency(*view));
      row.loads.push_back(view.get());
    }
    std::stable_sort(row.loads.begin(), row.loads.end(), [](const LoadView* a, const LoadView* b) {
      return std::pair(urgency(*a), a->minutes_left) < std::pair(urgency(*b), b->minutes_left);
    });
    rows.push_back(std::move(row));
  }
  std::stable_sort(rows.begin(), rows.end(), [](const Row& a, const Row& b) {
    return std::pair(a.urgency, a.minutes_left) < std::pair(b.urgency, b.minutes_left);
  });

  Json furnaces = Json::array();
  for (const Row& row : rows) {
    Json loads = Json::array();
    Condition condition = Condition::no_load;
    for (const LoadView* view : row.loads) {
      loads.push_back(floor_load_json(*view, *row.furnace, loads.size() < strips_a_furnace));
      if (condition == Condition::no_load || view->condition < condition) condition = view->condition;
    }
    const auto newest = board.newest_reading(row.furnace->id);
    furnaces.push_back({{"id", row.furnace->id},
                        {"name", row.furnace->name},
                        {"process", row.furnace->process},
                        {"line", row.furnace->line},
                        {"chambers", chambers_json(*row.furnace)},
                        {"condition", text(condition)},
                        {"data_time", time_or_null(newest)},
                        {"data_age_s", age_or_null(newest, frame.now_us)},
                        {"loads", std::move(loads)}});
  }
  const Json json{{"sequence", frame.sequence},
                  {"now", format_time(frame.now_us)},
                  {"plant", plant.name},
                  {"demo", plant.demo},
                  {"clock_speed", frame.clock_speed},
                  {"band", band_not_computed},
                  {"furnaces", std::move(furnaces)}};
  return dumped(json);
}

std::string snapshot_json(const LoadView& view, const std::vector<storage::LoadNote>& notes) {
  const LoadDefinition& load = *view.result.definition;
  Json shift_notes = Json::array();
  for (const storage::LoadNote& note : notes)
    shift_notes.push_back({{"at", format_time(note.at_us)}, {"person", note.person}, {"text", note.text}});
  const Json json{{"load",
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
                  {"band", band_not_computed},
                  {"place", place_json(view)},
                  {"inputs", inputs_json(view)},
                  {"segment", segment_json(view)},
                  {"minutes_left", view.minutes_left},
                  {"items", result_items_json(view.result)},
                  {"controlling_item", load.items[controlling_item(view.result)].name},
                  {"notes", result_notes_json(view.result)},
                  {"gaps", result_gaps_json(view.result)},
                  {"shift_notes", std::move(shift_notes)}};
  return dumped(json);
}

std::string history_json(const History& history) {
  const auto words = [](const std::vector<Basis>& bases) {
    Json list = Json::array();
    for (const Basis basis : bases) list.push_back(text(basis));
    return list;
  };
  Json items = Json::array();
  for (const auto& columns : history.items) {
    Json depth = Json::array();
    for (const auto& value : columns.case_depth_mm) depth.push_back(number_or_null(value));
    items.push_back({{"name", columns.name},
                     {"case_depth_mm", std::move(depth)},
                     {"surface_carbon_wt_pct", columns.surface_carbon_wt_pct},
                     {"part_temperature_degc", columns.part_temperature_degc}});
  }
  const Json json{{"time_s", history.time_s},
                  {"temperature_degc", history.temperature_degc},
                  {"temperature_basis", words(history.temperature_basis)},
                  {"carbon_potential_wt_pct", history.carbon_potential_wt_pct},
                  {"carbon_potential_basis", words(history.carbon_potential_basis)},
                  {"items", std::move(items)}};
  return json.dump();
}

}  // namespace hearthfront::server
