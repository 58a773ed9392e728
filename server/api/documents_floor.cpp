// The floor: every furnace, the one in most need first.
#include <algorithm>
#include <cmath>

#include "server/api/document_parts.h"
#include "server/api/documents.h"
#include "server/api/documents_outlook.h"
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
  const std::size_t i = controlling_item(view);
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
          {"case_depth_band_mm",
           view.result.members ? band_json(view.result.members->items[i].case_depth_m, 1e3) : Json(nullptr)},
          {"outlook", floor_outlook_json(view, i)},
          {"strip", with_strip ? strip_json(item, definition) : Json(nullptr)}};
}

Json floor_load_json(const LoadView& view, const Furnace& furnace, const AlertList& alerts, bool with_strip) {
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
          {"item", floor_item_json(view, with_strip)},
          {"alerts", load_alerts_json(alerts, view.row.id)}};
}

Json floor_alerts_json(const AlertList& alerts) {
  std::size_t unacknowledged = 0;
  std::int64_t newest = 0;
  for (const storage::AlertRow& row : alerts.active) {
    if (!row.acknowledged_us && !row.shelved_until_us) ++unacknowledged;
    newest = std::max(newest, row.id);
  }
  // The first may be shelved; then all are.
  const bool any = !alerts.active.empty() && !alerts.active.front().shelved_until_us;
  return {{"active", alerts.active.size()},
          {"unacknowledged", unacknowledged},
          {"worst", any ? Json(alerts.active.front().severity) : Json(nullptr)},
          {"newest_id", newest == 0 ? Json(nullptr) : Json(newest)},
          {"plant", furnace_alerts_json(alerts, "")}};
}

// Lower is more urgent.
int urgency(const LoadView& view) {
  if (view.condition == Condition::stale || view.condition == Condition::no_data_yet) return 0;
  if (!view.message.empty()) return 1;
  return view.minutes_left < 0 ? 2 : 3;
}

}  // namespace

std::string floor_json(const Plant& plant, const Board& board, const AlertList& alerts,
                       const FloorFrame& frame) {
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
      loads.push_back(floor_load_json(*view, *row.furnace, alerts, loads.size() < strips_a_furnace));
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
                        {"loads", std::move(loads)},
                        {"alerts", furnace_alerts_json(alerts, row.furnace->id)}});
  }
  const Json json{{"sequence", frame.sequence},
                  {"now", format_time(frame.now_us)},
                  {"plant", plant.name},
                  {"demo", plant.demo},
                  {"clock_speed", frame.clock_speed},
                  {"band", band_is},
                  {"alerts", floor_alerts_json(alerts)},
                  {"furnaces", std::move(furnaces)}};
  return dumped(json);
}

}  // namespace hearthfront::server
