#include <algorithm>
#include <cmath>
#include <set>

#include "server/base/time_text.h"
#include "server/live/definition_fields.h"
#include "server/live/definition_json.h"
#include "solver/solver.h"

namespace hearthfront::server {
namespace {

void check_hot_enough(const LoadDefinition& load) {
  for (std::size_t i = 0; i < load.items.size(); ++i) {
    const Item& item = load.items[i];
    const double austenite_degc = solver::ae3_degc(item.steel.composition, item.core_carbon_wt_pct);
    const bool hot = std::any_of(load.recipe.segments.begin(), load.recipe.segments.end(),
                                 [&](const Segment& s) { return s.temperature_degc > austenite_degc; });
    if (hot) continue;
    throw Problem{422, invalid_load, "The recipe never carburizes",
                  "recipe.segments: no segment is hot enough for " + item.steel.name + " of item " +
                      item.name + ", which is austenite only above " +
                      std::to_string(std::lround(austenite_degc)) + " degC. Are the temperatures in degC?",
                  "recipe.segments"};
  }
}

LoadDefinition read_load(const Json& json, const Plant& plant) {
  JsonFields fields(json, "", invalid_load);
  LoadDefinition load;
  load.name = fields.word("name", 60);
  const std::string furnace_id = fields.word("furnace", 60);
  const Furnace* furnace = plant.furnace(furnace_id);
  if (!furnace)
    throw Problem{
        422, "unknown-furnace", "The furnace is not in the plant file",
        "furnace: \"" + furnace_id + "\" is not in the plant file. GET /api/v1/furnaces lists the ids.",
        "furnace"};
  load.furnace = *furnace;
  if (fields.has("chamber")) {
    load.chamber = fields.word("chamber", 60);
    if (!furnace->chamber(load.chamber)) fields.fail("chamber", "the furnace has no chamber with this id.");
  } else if (furnace->chambers.size() == 1) {
    load.chamber = furnace->chambers.front().id;
  } else {
    fields.fail("chamber", "the furnace has several chambers; say which one.");
  }
  load.person = fields.word("person", 80);
  load.started_us = fields.time("started_at");
  if (fields.has("ended_at")) {
    load.ended_us = fields.time("ended_at");
    if (*load.ended_us <= load.started_us) fields.fail("ended_at", "the end must be later than the start.");
  }
  if (fields.has("charge_temperature_degc"))
    load.charge_temperature_degc = fields.number("charge_temperature_degc", -20, 1100, "degC");
  if (fields.has("lattice_s")) load.lattice_s = fields.number("lattice_s", 5, 600, "s");
  load.recipe = read_recipe(fields);
  fields.any("recipe");
  const Json& items = fields.array("items", 1, 40);
  std::set<std::string> names;
  for (std::size_t i = 0; i < items.size(); ++i) {
    const std::string path = "items[" + std::to_string(i) + "]";
    load.items.push_back(read_item(items[i], path, plant, load.furnace));
    if (!names.insert(load.items.back().name).second)
      throw Problem{422, invalid_load, "Two items have one name",
                    path + ".name: another item is already called \"" + load.items.back().name + "\".",
                    path + ".name"};
  }
  for (const char* optional : {"chamber", "ended_at", "charge_temperature_degc", "lattice_s"})
    fields.ignore_null(optional);
  fields.finish();
  load.model_version = solver::model_version;
  check_hot_enough(load);
  return load;
}

Furnace read_furnace(const Json& json) {
  Furnace furnace;
  furnace.id = json.at("id");
  furnace.name = json.at("name");
  furnace.process = json.at("process");
  furnace.co_fraction = json.at("co_fraction");
  furnace.h2_fraction = json.at("h2_fraction");
  furnace.lag_min = json.at("lag_min");
  furnace.total_pressure_bar = json.at("total_pressure_bar");
  furnace.diffusivity = json.at("diffusivity");
  if (json.contains("beta_m_per_s")) furnace.beta_m_per_s = json.at("beta_m_per_s").get<double>();
  for (const Json& chamber : json.at("chambers"))
    furnace.chambers.push_back({chamber.at("id"), chamber.at("name")});
  for (const Json& entry : json.at("channels")) {
    Channel channel;
    channel.name = entry.at("name");
    channel.role = role_from(entry.at("role").get<std::string>()).value();
    channel.unit = unit_from(entry.at("unit").get<std::string>()).value();
    channel.chamber = entry.at("chamber");
    channel.low = entry.at("low");
    channel.high = entry.at("high");
    channel.expected_interval_s = entry.at("expected_interval_s");
    channel.gap_limit_s = entry.at("gap_limit_s");
    channel.hold_limit_s = entry.at("hold_limit_s");
    furnace.channels.push_back(std::move(channel));
  }
  return furnace;
}

}  // namespace

LoadDefinition read_load_body(std::string_view body, const Plant& plant) {
  return read_load(parse_body(body), plant);
}

LoadDefinition read_stored_definition(std::string_view stored) {
  const Json json = Json::parse(stored.begin(), stored.end());
  Plant copy;
  copy.furnaces.push_back(read_furnace(json.at("furnace")));
  LoadDefinition load = read_load(json.at("load"), copy);
  load.model_version = json.at("model_version");
  return load;
}

}  // namespace hearthfront::server
