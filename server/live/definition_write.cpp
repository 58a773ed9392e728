#include "server/base/time_text.h"
#include "server/live/definition_fields.h"
#include "server/live/definition_json.h"

namespace hearthfront::server {
namespace {

Json steel_json(const solver::Steel& steel) {
  return {{"name", steel.name}, {"composition_wt_pct", composition_json(steel.composition)}};
}

Json library_copy_json(const LibraryCopy& library) {
  return {{"key", library.key}, {"version", library.version}};
}

Json item_json(const Item& item) {
  Json json{{"name", item.name}, {"quantity", item.quantity}};
  json.update(part_json(item));
  if (item.library) json["library"] = library_copy_json(*item.library);
  if (item.initial) {
    Json initial = Json::object();
    if (item.initial->load) initial = {{"load", item.initial->load}, {"item", item.initial->item}};
    initial["depth_mm"] = item.initial->depth_mm;
    initial["carbon_wt_pct"] = item.initial->carbon_wt_pct;
    json["initial_profile"] = std::move(initial);
  }
  return json;
}

Json segment_json(const Segment& segment) {
  Json json{{"name", segment.name},
            {"duration_min", segment.duration_min},
            {"temperature_degc", segment.temperature_degc},
            {"carbon_potential_wt_pct", segment.carbon_potential_wt_pct},
            {"ramp_min", segment.ramp_min},
            {"tolerance_min", segment.tolerance_min}};
  if (!segment.until) return json;
  Json until{{"kind", text(segment.until->kind)}};
  if (!segment.until->item.empty()) until["item"] = segment.until->item;
  switch (segment.until->kind) {
    case Until::Kind::case_depth:
      until["depth_mm"] = segment.until->limit;
      break;
    case Until::Kind::surface_carbon:
      until["wt_pct"] = segment.until->limit;
      break;
    case Until::Kind::part_temperature:
      until["within_k"] = segment.until->limit;
      break;
  }
  json["until"] = std::move(until);
  json["longest_min"] = segment.longest_min;
  return json;
}

Json path_json(const LoadDefinition& load) {
  Json path = Json::array();
  for (const PathStep& step : load.path) {
    Json json{{"from", format_time(step.from_us)}};
    if (step.outside()) {
      json["outside"] = true;
    } else {
      json["furnace"] = step.furnace;
      json["chamber"] = step.chamber;
    }
    path.push_back(std::move(json));
  }
  return path;
}

Json plans_json(const LoadDefinition& load) {
  Json plans = Json::array();
  for (const AdoptedPlan& plan : load.plans)
    plans.push_back({{"from", format_time(plan.from_us)},
                     {"person", plan.person},
                     {"reason", plan.reason},
                     {"segments", recipe_json(plan.recipe).at("segments")}});
  return plans;
}

}  // namespace

Json part_json(const Item& item) {
  Json json{{"part", item.part},
            {"steel", steel_json(item.steel)},
            {"core_carbon_wt_pct", item.core_carbon_wt_pct},
            {"section", section_json(item.section)},
            {"criterion", criterion_json(item.criterion)},
            {"case_depth_window_mm", window_json(item.case_depth_window_mm)}};
  if (item.surface_carbon_window_wt_pct)
    json["surface_carbon_window_wt_pct"] = window_json(*item.surface_carbon_window_wt_pct);
  json["grinding_stock_mm"] = item.grinding_stock_mm;
  json["lag_min"] = item.lag_min;
  return json;
}

Json quench_json(const Quench& quench) {
  Json json{{"temperature_degc", quench.temperature_degc}, {"tempering", nullptr}};
  if (quench.tempering)
    json["tempering"] = {{"temperature_degc", quench.tempering->temperature_degc},
                         {"hours", quench.tempering->hours}};
  return json;
}

Json furnace_copy_json(const Furnace& furnace) {
  Json json{{"id", furnace.id},
            {"name", furnace.name},
            {"process", furnace.process},
            {"co_fraction", furnace.co_fraction},
            {"h2_fraction", furnace.h2_fraction},
            {"lag_min", furnace.lag_min},
            {"total_pressure_bar", furnace.total_pressure_bar},
            {"diffusivity", furnace.diffusivity},
            {"line", furnace.line},
            {"dew_point_over", furnace.dew_over_frost ? "frost" : "water"},
            {"source_tolerance_wt_pct", furnace.source_tolerance_wt_pct},
            {"thermocouple_tolerance_k", furnace.thermocouple_tolerance_k},
            {"uniformity_k", furnace.uniformity_k},
            {"carbon_potential_sd_wt_pct", furnace.carbon_potential_sd_wt_pct},
            {"highest_temperature_degc", furnace.highest_temperature_degc},
            {"highest_carbon_potential_wt_pct", furnace.highest_carbon_potential_wt_pct},
            {"carbon_sources", Json::array()},
            {"chambers", Json::array()},
            {"channels", Json::array()}};
  for (const CarbonSource source : furnace.carbon_sources) json["carbon_sources"].push_back(key(source));
  if (furnace.beta_m_per_s) json["beta_m_per_s"] = *furnace.beta_m_per_s;
  for (const Chamber& chamber : furnace.chambers)
    json["chambers"].push_back({{"id", chamber.id}, {"name", chamber.name}, {"places", chamber.places}});
  for (const Channel& channel : furnace.channels) json["channels"].push_back(channel_json(channel));
  return json;
}

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
  for (const Segment& segment : recipe.segments) segments.push_back(segment_json(segment));
  Json json{{"name", recipe.name}, {"segments", std::move(segments)}};
  if (recipe.temperature_may_change) json["temperature_may_change"] = true;
  if (recipe.library) json["library"] = library_copy_json(*recipe.library);
  return json;
}

Json load_body_json(const LoadDefinition& load) {
  Json json{{"name", load.name},
            {"furnace", load.path.front().furnace},
            {"chamber", load.path.front().chamber},
            {"person", load.person},
            {"started_at", format_time(load.started_us)}};
  if (load.ended_us) json["ended_at"] = format_time(*load.ended_us);
  json["path"] = path_json(load);
  json["charge_temperature_degc"] = load.charge_temperature_degc;
  json["lattice_s"] = load.lattice_s;
  json["film_min"] = load.film_min;
  json["quench"] = quench_json(load.quench);
  json["recipe"] = recipe_json(load.recipe);
  if (!load.plans.empty()) json["plans"] = plans_json(load);
  json["items"] = Json::array();
  for (const Item& item : load.items) json["items"].push_back(item_json(item));
  json["masks"] = Json::array();
  for (const MaskSpan& mask : load.masks)
    json["masks"].push_back({{"furnace", mask.furnace},
                             {"channel", mask.channel},
                             {"from", format_time(mask.from_us)},
                             {"to", format_time(mask.to_us)},
                             {"reason", mask.reason}});
  return json;
}

std::string load_body(const LoadDefinition& load) {
  return load_body_json(load).dump();
}

std::string stored_definition(const LoadDefinition& load) {
  Json json{
      {"model_version", load.model_version}, {"load", load_body_json(load)}, {"furnaces", Json::array()}};
  for (const Furnace& furnace : load.furnaces) json["furnaces"].push_back(furnace_copy_json(furnace));
  return json.dump();
}

}  // namespace hearthfront::server
