#include "server/live/result_json.h"

#include <cstdio>

#include "server/base/time_text.h"
#include "server/live/result_fields.h"

namespace hearthfront::server {
namespace {

Json input_json(const InputSummary& summary, const std::vector<std::string>& channels) {
  return {{"measured_s", summary.measured_s},
          {"held_s", summary.held_s},
          {"masked_s", summary.masked_s},
          {"planned_s", summary.planned_s},
          {"channels", channels}};
}

}  // namespace

Json number_or_null(std::optional<double> value) {
  return value ? Json(*value) : Json(nullptr);
}

std::string carbon_source(const RunResult& result) {
  for (const SourceValue& each : result.sources) {
    if (!each.leads) continue;
    if (each.source == CarbonSource::logged) return "logged";
    return std::string(text(each.source)) + (result.co_measured ? ", CO measured" : ", CO assumed");
  }
  return "recipe";
}

Json result_segments_json(const RunResult& result) {
  Json segments = Json::array();
  const auto& runs = result.segments;
  for (std::size_t i = 0; i < runs.size(); ++i)
    segments.push_back({{"name", result.definition->recipe_of(runs[i].plan).segments[runs[i].index].name},
                        {"from", format_time(runs[i].from_us)},
                        {"to", format_time(i + 1 < runs.size() ? runs[i + 1].from_us : result.state_us)},
                        {"by", text(runs[i].by)}});
  return segments;
}

Json band_json(const solver::Band& band, double factor) {
  return {{"low", band.low * factor}, {"median", band.median * factor}, {"high", band.high * factor}};
}

Json window_chance_json(const solver::WindowChance& chance, const char* below, const char* above) {
  return {{below, chance.below}, {"inside", chance.inside}, {above, chance.above}};
}

const char* band_words(const RunResult& result) {
  return result.members ? band_is : band_not_computed;
}

namespace {

void add_bands(const RunResult& result, std::size_t i, Json& item) {
  if (!result.members) {
    for (const char* name : {"case_depth_band_mm", "surface_carbon_band_wt_pct", "chance", "lab_chance",
                             "surface_chance", "joint_chance"})
      item[name] = nullptr;
    return;
  }
  const solver::ItemOutlook& members = result.members->items[i];
  item["case_depth_band_mm"] = band_json(members.case_depth_m, 1e3);
  item["surface_carbon_band_wt_pct"] = band_json(members.surface_carbon_wt_pct);
  item["chance"] = window_chance_json(members.case_depth, "shallow", "deep");
  item["lab_chance"] = window_chance_json(members.lab_case_depth, "shallow", "deep");
  item["surface_chance"] = result.definition->items[i].surface_carbon_window_wt_pct
                               ? window_chance_json(members.surface_carbon, "below", "above")
                               : Json(nullptr);
  item["joint_chance"] = members.joint_chance;
}

}  // namespace

Json criterion_result_json(const Criterion& criterion) {
  Json json = criterion_json(criterion);
  json["carbon_limit_wt_pct"] = criterion.carbon_limit_wt_pct;
  json["text"] = criterion.text();
  return json;
}

Json hardness_json(const ItemResult& item) {
  const HardnessResult& hardness = item.hardness;
  Json sources = Json::array();
  for (const SourceTable& table : hardness.sources) {
    Json values = Json::array();
    for (const solver::SourceValue& each : table.values)
      values.push_back({{"source", each.source},
                        {"value", each.value},
                        {"in_stated_range", each.in_stated_range},
                        {"used", &each == &table.values.front()}});
    sources.push_back({{"quantity", table.quantity}, {"unit", table.unit}, {"values", std::move(values)}});
  }
  return {{"as", hardness.treatment},
          {"surface_hv", hardness.surface_hv},
          {"surface_hrc", number_or_null(hardness.surface_hrc)},
          {"surface_retained_austenite_pct", hardness.surface_retained_austenite_pct},
          {"depth_mm", item.profile_depth_mm},
          {"hv", hardness.hv},
          {"retained_austenite_pct", hardness.retained_austenite_pct},
          {"sources", std::move(sources)}};
}

Json result_items_json(const RunResult& result) {
  Json items = Json::array();
  for (std::size_t i = 0; i < result.items.size(); ++i) {
    const ItemResult& item = result.items[i];
    const Item& definition = result.definition->items[i];
    const auto& surface_window = definition.surface_carbon_window_wt_pct;
    items.push_back(
        {{"name", definition.name},
         {"part", definition.part},
         {"quantity", definition.quantity},
         {"steel", definition.steel.name},
         {"shape", text(definition.section.shape)},
         {"section", section_json(definition.section)},
         {"core_carbon_wt_pct", definition.core_carbon_wt_pct},
         {"criterion", criterion_result_json(definition.criterion)},
         {"case_depth_mm", number_or_null(item.case_depth_mm)},
         {"grinding_stock_mm", definition.grinding_stock_mm},
         {"finished_case_depth_mm", number_or_null(item.finished_case_depth_mm)},
         {"case_depth_window_mm", window_json(definition.case_depth_window_mm)},
         {"surface_carbon_wt_pct", item.surface_carbon_wt_pct},
         {"surface_carbon_window_wt_pct", surface_window ? window_json(*surface_window) : Json(nullptr)},
         {"total_depth_mm", number_or_null(item.total_depth_mm)},
         {"turnover_depth_mm", number_or_null(item.turnover_depth_mm)},
         {"depth_at_0p35_mm", number_or_null(item.depth_at_0p35_mm)},
         {"depth_at_0p40_mm", number_or_null(item.depth_at_0p40_mm)},
         {"carbon_uptake_g_m2", item.carbon_uptake_g_m2},
         {"balance_residual_relative", item.balance_residual_relative},
         {"part_temperature_degc", item.part_temperature_degc},
         {"outcome", outcome_word(item.outcome)},
         {"hardness", hardness_json(item)},
         {"profile", {{"depth_mm", item.profile_depth_mm}, {"carbon_wt_pct", item.profile_carbon_wt_pct}}}});
    add_bands(result, i, items.back());
  }
  return items;
}

Json result_notes_json(const RunResult& result) {
  Json notes = Json::array();
  for (const NoteSpan& note : result.notes)
    notes.push_back({{"kind", note_kind(note.note)},
                     {"item", note.item},
                     {"from", format_time(note.from_us)},
                     {"to", format_time(note.to_us)},
                     {"text", note_sentence(note.note)}});
  return notes;
}

Json result_gaps_json(const RunResult& result) {
  Json gaps = Json::array();
  for (const GapSpan& gap : result.gaps)
    gaps.push_back({{"input", gap.input},
                    {"basis", text(gap.span.basis)},
                    {"from", format_time(gap.span.from_us)},
                    {"to", format_time(gap.span.to_us)}});
  return gaps;
}

std::string result_json(const RunResult& result) {
  const LoadDefinition& load = *result.definition;
  Json inputs{{"temperature", input_json(result.temperature, result.temperature_channels)},
              {"carbon_potential", input_json(result.carbon_potential, result.carbon_channels)}};
  inputs["carbon_potential"]["source"] = carbon_source(result);
  inputs["carbon_potential"]["largest_disagreement_wt_pct"] = result.largest_disagreement_wt_pct;
  if (result.load_temperature)
    inputs["load_temperature"] = input_json(*result.load_temperature, result.load_channels);
  const Json json{{"load", load.name},
                  {"furnace", load.path.front().furnace},
                  {"chamber", load.path.front().chamber},
                  {"path", load_body_json(load).at("path")},
                  {"model_version", solver::model_version},
                  {"lattice_s", load.lattice_s},
                  {"started_at", format_time(load.started_us)},
                  {"data_time", format_time(result.state_us)},
                  {"ended_at", load.ended_us ? Json(format_time(*load.ended_us)) : Json(nullptr)},
                  {"final", result.final},
                  {"band", band_words(result)},
                  {"inputs", std::move(inputs)},
                  {"segments", result_segments_json(result)},
                  {"gaps", result_gaps_json(result)},
                  {"notes", result_notes_json(result)},
                  {"items", result_items_json(result)}};
  return json.dump();
}

std::string result_table(const RunResult& result) {
  const LoadDefinition& load = *result.definition;
  std::string out = "Load " + load.name + " in " + load.first_furnace().name + ", " +
                    format_time(load.started_us) + " to " + format_time(result.state_us) +
                    (result.final ? " (ended)" : " (still open)") + "\n";
  char line[256];
  const auto minutes = [](double s) { return s / 60.0; };
  for (const auto& [name, input] : {std::pair{"temperature", result.temperature},
                                    std::pair{"carbon potential", result.carbon_potential}}) {
    std::snprintf(line, sizeof line, "  %-17s measured %.0f min, held %.0f min, from the recipe %.0f min\n",
                  name, minutes(input.measured_s), minutes(input.held_s), minutes(input.planned_s));
    out += line;
  }
  std::snprintf(line, sizeof line, "\n  %-14s %-14s %-26s %10s %15s %11s %9s\n", "item", "steel",
                "case depth to", "depth mm", "window mm", "surface %C", "total mm");
  out += line;
  for (std::size_t i = 0; i < result.items.size(); ++i) {
    const Item& item = load.items[i];
    const ItemResult& r = result.items[i];
    const auto mm = [](std::optional<double> depth) {
      char text[16];
      std::snprintf(text, sizeof text, "%.2f", depth.value_or(0));
      return depth ? std::string(text) : std::string("-");
    };
    std::snprintf(line, sizeof line, "  %-14.14s %-14.14s %-26.26s %10s %7.2f -%6.2f %11.2f %9s\n",
                  item.name.c_str(), item.steel.name.c_str(), item.criterion.text().c_str(),
                  mm(r.case_depth_mm).c_str(), item.case_depth_window_mm.first,
                  item.case_depth_window_mm.second, r.surface_carbon_wt_pct, mm(r.total_depth_mm).c_str());
    out += line;
  }
  if (result.members)
    for (std::size_t i = 0; i < result.items.size(); ++i) {
      const solver::ItemOutlook& members = result.members->items[i];
      std::snprintf(line, sizeof line,
                    "\n  %s: finished depth %.2f to %.2f mm, 9 times in 10; chance of its window %.0f %%",
                    load.items[i].name.c_str(), members.case_depth_m.low * 1e3,
                    members.case_depth_m.high * 1e3, members.case_depth.inside * 100);
      out += line;
    }
  else
    out += "\n  Band not computed.";
  out += "\n\n  A prediction releases nothing: measure a coupon or a part.\n";
  for (const NoteSpan& note : result.notes)
    out += "  " + format_time(note.from_us) + " to " + format_time(note.to_us) + ", item " + note.item +
           ": " + note_sentence(note.note) + "\n";
  return out;
}

}  // namespace hearthfront::server
