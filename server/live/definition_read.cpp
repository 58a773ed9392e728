#include <algorithm>
#include <cmath>
#include <set>
#include <stdexcept>

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

void check_until(const LoadDefinition& load) {
  const auto known = [&](const std::string& name) {
    return std::any_of(load.items.begin(), load.items.end(),
                       [&](const Item& item) { return item.name == name; });
  };
  for (std::size_t n = 0; n <= load.plans.size(); ++n) {
    const Recipe& recipe = load.recipe_of(n);
    for (std::size_t i = 0; i < recipe.segments.size(); ++i) {
      const auto& until = recipe.segments[i].until;
      if (!until || until->item.empty() || known(until->item)) continue;
      const std::string where = n == 0 ? "recipe" : "plans[" + std::to_string(n - 1) + "]";
      const std::string path = where + ".segments[" + std::to_string(i) + "].until.item";
      throw Problem{422, invalid_load, "The segment ends by an item that is not there",
                    path + ": the load has no item \"" + until->item + "\".", path};
    }
  }
}

const Furnace& known_furnace(const Plant& plant, const std::string& id) {
  const Furnace* furnace = plant.furnace(id);
  if (furnace) return *furnace;
  throw Problem{422, "unknown-furnace", "The furnace is not in the plant file",
                "furnace: \"" + id + "\" is not in the plant file. GET /api/v1/furnaces lists the ids.",
                "furnace"};
}

void read_places(JsonFields& fields, const Plant& plant, LoadDefinition& load) {
  const std::string id = fields.word("furnace", 60);
  const Furnace& furnace = known_furnace(plant, id);
  std::string chamber;
  if (fields.has("chamber")) {
    chamber = fields.word("chamber", 60);
    if (!furnace.chamber(chamber)) fields.fail("chamber", "the furnace has no chamber with this id.");
  } else if (furnace.chambers.size() == 1 || furnace.line) {
    chamber = furnace.chambers.front().id;
  } else if (!fields.has("path")) {
    fields.fail("chamber", "the furnace has several chambers; say which one.");
  }
  if (fields.has("path")) {
    load.path = read_path(fields, plant, load.started_us, load.ended_us);
    if (load.path.front().furnace != id || (!chamber.empty() && load.path.front().chamber != chamber))
      fields.fail("path", "the first step must be in the furnace and chamber that the load names.");
  } else {
    load.path = {{load.started_us, id, chamber}};
  }
  for (const PathStep& step : load.path)
    if (!step.outside() && !load.furnace(step.furnace))
      load.furnaces.push_back(known_furnace(plant, step.furnace));
}

LoadDefinition read_load(const Json& json, const Plant& plant) {
  JsonFields fields(json, "", invalid_load);
  LoadDefinition load;
  load.name = fields.word("name", 60);
  load.person = fields.word("person", 80);
  load.started_us = fields.time("started_at");
  if (fields.has("ended_at")) {
    load.ended_us = fields.time("ended_at");
    if (*load.ended_us <= load.started_us) fields.fail("ended_at", "the end must be later than the start.");
  }
  read_places(fields, plant, load);
  if (fields.has("charge_temperature_degc"))
    load.charge_temperature_degc = fields.number("charge_temperature_degc", -20, 1100, "degC");
  if (fields.has("lattice_s")) load.lattice_s = fields.number("lattice_s", 5, 600, "s");
  if (fields.has("film_min")) load.film_min = fields.number("film_min", 0, 120, "minutes");
  load.quench = read_quench(fields);
  load.recipe = read_recipe(fields.object("recipe"), "recipe");
  load.plans = read_plans(fields, load);
  const Json& items = fields.array("items", 1, 40);
  std::set<std::string> names;
  for (std::size_t i = 0; i < items.size(); ++i) {
    const std::string path = "items[" + std::to_string(i) + "]";
    load.items.push_back(read_item(items[i], path, plant, load.first_furnace().lag_min));
    settle_criterion(load.items.back(), load.quench, path);
    if (!names.insert(load.items.back().name).second)
      throw Problem{422, invalid_load, "Two items have one name",
                    path + ".name: another item is already called \"" + load.items.back().name + "\".",
                    path + ".name"};
  }
  load.masks = read_masks(fields);
  fields.finish();
  load.model_version = solver::model_version;
  check_until(load);
  check_hot_enough(load);
  return load;
}

}  // namespace

Furnace read_furnace_copy(const Json& json) {
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
  // What version 1 of the stored copy did not have keeps its default.
  furnace.line = json.value("line", false);
  furnace.dew_over_frost = json.value("dew_point_over", "water") == "frost";
  furnace.source_tolerance_wt_pct = json.value("source_tolerance_wt_pct", furnace.source_tolerance_wt_pct);
  const auto keep = [&](const char* name, double& value) { value = json.value(name, value); };
  keep("thermocouple_tolerance_k", furnace.thermocouple_tolerance_k);
  keep("uniformity_k", furnace.uniformity_k);
  keep("carbon_potential_sd_wt_pct", furnace.carbon_potential_sd_wt_pct);
  keep("highest_temperature_degc", furnace.highest_temperature_degc);
  keep("highest_carbon_potential_wt_pct", furnace.highest_carbon_potential_wt_pct);
  if (json.contains("carbon_sources")) {
    const auto known = furnace.carbon_sources;
    furnace.carbon_sources.clear();
    for (const Json& word : json.at("carbon_sources"))
      for (const CarbonSource source : known)
        if (word == key(source)) furnace.carbon_sources.push_back(source);
  }
  for (const Json& chamber : json.at("chambers"))
    furnace.chambers.push_back({chamber.at("id"), chamber.at("name"), chamber.value("places", 1)});
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

LoadDefinition read_load_body(std::string_view body, const Plant& plant) {
  return read_load(parse_body(body), plant);
}

namespace {

LoadDefinition read_copy(std::string_view stored) {
  const Json json = Json::parse(stored.begin(), stored.end());
  Plant copy;
  if (json.contains("furnace")) copy.furnaces.push_back(read_furnace_copy(json.at("furnace")));
  if (json.contains("furnaces"))
    for (const Json& furnace : json.at("furnaces")) copy.furnaces.push_back(read_furnace_copy(furnace));
  LoadDefinition load = read_load(json.at("load"), copy);
  load.model_version = json.at("model_version");
  return load;
}

}  // namespace

LoadDefinition read_stored_definition(std::string_view stored) {
  try {
    return read_copy(stored);
  } catch (const Problem& problem) {
    throw std::runtime_error("the stored load cannot be read: " + problem.detail);
  }
}

LoadDefinition as_stored(const LoadDefinition& load) {
  return read_copy(stored_definition(load));
}

}  // namespace hearthfront::server
