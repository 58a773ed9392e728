#include "server/base/time_text.h"
#include "server/live/definition_fields.h"
#include "server/live/definition_json.h"

namespace hearthfront::server {
namespace {

Json steel_json(const solver::Steel& steel) {
  return {{"name", steel.name}, {"composition_wt_pct", composition_json(steel.composition)}};
}

Json item_json(const Item& item) {
  Json json{{"name", item.name},
            {"part", item.part},
            {"quantity", item.quantity},
            {"steel", steel_json(item.steel)},
            {"core_carbon_wt_pct", item.core_carbon_wt_pct},
            {"section", section_json(item.section)},
            {"criterion", criterion_json(item.criterion)},
            {"case_depth_window_mm", window_json(item.case_depth_window_mm)}};
  if (item.surface_carbon_window_wt_pct)
    json["surface_carbon_window_wt_pct"] = window_json(*item.surface_carbon_window_wt_pct);
  json["lag_min"] = item.lag_min;
  return json;
}

Json furnace_json(const Furnace& furnace) {
  Json json{{"id", furnace.id},
            {"name", furnace.name},
            {"process", furnace.process},
            {"co_fraction", furnace.co_fraction},
            {"h2_fraction", furnace.h2_fraction},
            {"lag_min", furnace.lag_min},
            {"total_pressure_bar", furnace.total_pressure_bar},
            {"diffusivity", furnace.diffusivity},
            {"chambers", Json::array()},
            {"channels", Json::array()}};
  if (furnace.beta_m_per_s) json["beta_m_per_s"] = *furnace.beta_m_per_s;
  for (const Chamber& chamber : furnace.chambers)
    json["chambers"].push_back({{"id", chamber.id}, {"name", chamber.name}});
  for (const Channel& channel : furnace.channels) json["channels"].push_back(channel_json(channel));
  return json;
}

}  // namespace

Json composition_json(const solver::Composition& c) {
  return {{"C", c.c_wt_pct},   {"Mn", c.mn_wt_pct}, {"Cr", c.cr_wt_pct},
          {"Ni", c.ni_wt_pct}, {"Mo", c.mo_wt_pct}, {"Si", c.si_wt_pct}};
}

Json channel_json(const Channel& channel) {
  return {{"name", channel.name},
          {"role", text(channel.role)},
          {"unit", text(channel.unit)},
          {"chamber", channel.chamber},
          {"low", channel.low},
          {"high", channel.high},
          {"expected_interval_s", channel.expected_interval_s},
          {"gap_limit_s", channel.gap_limit_s},
          {"hold_limit_s", channel.hold_limit_s}};
}

Json window_json(const Window& window) {
  return Json::array({window.first, window.second});
}

Json criterion_json(const Criterion& criterion) {
  Json json{{"kind", text(criterion.kind)}};
  switch (criterion.kind) {
    case CriterionKind::hardness_hv:
      json["limit_hv"] = criterion.limit;
      break;
    case CriterionKind::hardness_hrc:
      json["limit_hrc"] = criterion.limit;
      break;
    case CriterionKind::carbon:
      json["limit_wt_pct"] = criterion.limit;
      return json;
  }
  json["martensite_pct"] = criterion.martensite_pct;
  return json;
}

Json section_json(const ItemSection& section) {
  Json json{{"shape", text(section.shape)}};
  switch (section.shape) {
    case solver::Shape::plate:
      json["thickness_mm"] = section.thickness_mm;
      break;
    case solver::Shape::cylinder:
    case solver::Shape::sphere:
      json["diameter_mm"] = section.diameter_mm;
      break;
    case solver::Shape::bore:
      json["bore_diameter_mm"] = section.bore_diameter_mm;
      json["wall_mm"] = section.wall_mm;
      break;
  }
  return json;
}

Json recipe_json(const Recipe& recipe) {
  Json segments = Json::array();
  for (const Segment& segment : recipe.segments)
    segments.push_back({{"name", segment.name},
                        {"duration_min", segment.duration_min},
                        {"temperature_degc", segment.temperature_degc},
                        {"carbon_potential_wt_pct", segment.carbon_potential_wt_pct}});
  return {{"name", recipe.name}, {"segments", segments}};
}

Json load_body_json(const LoadDefinition& load) {
  Json json{{"name", load.name},
            {"furnace", load.furnace.id},
            {"chamber", load.chamber},
            {"person", load.person},
            {"started_at", format_time(load.started_us)}};
  if (load.ended_us) json["ended_at"] = format_time(*load.ended_us);
  json["charge_temperature_degc"] = load.charge_temperature_degc;
  json["lattice_s"] = load.lattice_s;
  json["recipe"] = recipe_json(load.recipe);
  json["items"] = Json::array();
  for (const Item& item : load.items) json["items"].push_back(item_json(item));
  return json;
}

std::string load_body(const LoadDefinition& load) {
  return load_body_json(load).dump();
}

std::string stored_definition(const LoadDefinition& load) {
  const Json json{{"model_version", load.model_version},
                  {"load", load_body_json(load)},
                  {"furnace", furnace_json(load.furnace)}};
  return json.dump();
}

}  // namespace hearthfront::server
