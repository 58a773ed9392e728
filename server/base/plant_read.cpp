#include <algorithm>

#include "server/base/plant_parts.h"

namespace hearthfront::server {

bool read_id(ConfigTable& table, std::string_view key, std::string& into) {
  std::string id;
  if (!table.text(key, id, 1, 40)) return false;
  const auto inside = [](char c) {
    return (c >= 'a' && c <= 'z') || (c >= '0' && c <= '9') || c == '-' || c == '_' || c == '.';
  };
  const auto ends = [](char c) { return c != '-' && c != '.'; };
  if (!std::all_of(id.begin(), id.end(), inside) || !ends(id.front()) || !ends(id.back())) {
    table.fault(key, "\"" + id + "\" may hold only a-z, 0-9 and, inside, - _ .");
    return false;
  }
  into = id;
  return true;
}

void claim(ConfigTable& table, std::string_view key, const std::string& id, std::vector<std::string>& taken) {
  if (id.empty()) return;
  if (std::find(taken.begin(), taken.end(), id) != taken.end()) {
    table.fault(key, "\"" + id + "\" is taken already");
  } else {
    taken.push_back(id);
  }
}

std::string list_of(const std::vector<std::string>& words) {
  std::string list;
  for (std::size_t i = 0; i < words.size(); ++i) {
    if (i > 0) list += i + 1 == words.size() ? " or " : ", ";
    list += '"' + words[i] + '"';
  }
  return list;
}

namespace {

std::vector<Chamber> read_chambers(ConfigTable& table) {
  if (!table.has("chambers")) {
    table.tables("chambers");  // makes it a known key
    return {{"main", "Main", 1}};
  }
  std::vector<Chamber> chambers;
  std::vector<std::string> taken;
  for (ConfigTable& each : table.tables("chambers")) {
    Chamber chamber;
    each.require("id", "loads and channels name the chamber by it");
    read_id(each, "id", chamber.id);
    claim(each, "id", chamber.id, taken);
    chamber.name = chamber.id;
    each.text("name", chamber.name, 1, 60);
    std::int64_t places = chamber.places;
    if (each.integer("places", places, 1, 200)) chamber.places = static_cast<int>(places);
    each.finish();
    chambers.push_back(chamber);
  }
  if (chambers.empty())
    table.fault("chambers", "a furnace has at least one chamber; leave the key out for one");
  return chambers;
}

void read_gas(ConfigTable& table, Furnace& furnace) {
  table.number("co_fraction", furnace.co_fraction, 0.01, 1);
  table.number("h2_fraction", furnace.h2_fraction, 0, 1);
  if (furnace.co_fraction + furnace.h2_fraction > 1.0) {
    table.fault("co_fraction",
                "co_fraction and h2_fraction together exceed 1; give mole fractions, 0.20 for 20 %");
  }
  table.number("beta_m_per_s", furnace.beta_m_per_s, 1e-9, 1e-5);
  table.number("lag_min", furnace.lag_min, 0, 600);
  table.number("total_pressure_bar", furnace.total_pressure_bar, 0.5, 2);
  if (table.text("diffusivity", furnace.diffusivity) && furnace.diffusivity != "agren" &&
      furnace.diffusivity != "tibbetts") {
    table.fault("diffusivity", "expected \"agren\" or \"tibbetts\", got \"" + furnace.diffusivity + "\"");
  }
}

void read_bounds(ConfigTable& table, Furnace& furnace) {
  table.number("thermocouple_tolerance_k", furnace.thermocouple_tolerance_k, 0.1, 30);
  table.number("uniformity_k", furnace.uniformity_k, 0.1, 50);
  table.number("carbon_potential_sd_wt_pct", furnace.carbon_potential_sd_wt_pct, 0.001, 0.3);
  table.number("highest_temperature_degc", furnace.highest_temperature_degc, 700, 1150);
  table.number("highest_carbon_potential_wt_pct", furnace.highest_carbon_potential_wt_pct, 0.3, 1.8);
}

void read_sources(ConfigTable& table, Furnace& furnace) {
  std::string surface = "water";
  if (table.text("dew_point_over", surface) && surface != "water" && surface != "frost")
    table.fault("dew_point_over", "expected \"water\" or \"frost\", got \"" + surface + "\"");
  furnace.dew_over_frost = surface == "frost";
  table.number("source_tolerance_wt_pct", furnace.source_tolerance_wt_pct, 0.01, 1);
  std::vector<std::string> words;
  if (!table.texts("carbon_sources", words, 4, 20)) return;
  std::vector<CarbonSource> order;
  std::vector<std::string> known;
  for (const CarbonSource source : Furnace{}.carbon_sources) known.emplace_back(key(source));
  for (const std::string& word : words) {
    const auto place = std::find(known.begin(), known.end(), word);
    const auto source = place == known.end()
                            ? CarbonSource::logged
                            : Furnace{}.carbon_sources.at(static_cast<std::size_t>(place - known.begin()));
    if (place == known.end())
      table.fault("carbon_sources", "expected " + list_of(known) + ", got \"" + word + "\"");
    else if (std::find(order.begin(), order.end(), source) != order.end())
      table.fault("carbon_sources", "\"" + word + "\" stands twice");
    else
      order.push_back(source);
  }
  if (!order.empty()) furnace.carbon_sources = order;
}

Furnace read_furnace(ConfigTable& table, std::vector<std::string>& ids) {
  Furnace furnace;
  table.require("id", "readings and loads name the furnace by it");
  read_id(table, "id", furnace.id);
  claim(table, "id", furnace.id, ids);
  furnace.name = furnace.id;
  table.text("name", furnace.name, 1, 60);
  if (table.text("process", furnace.process) && furnace.process != "gas carburizing") {
    table.fault("process", "expected \"gas carburizing\", got \"" + furnace.process + "\"");
  }
  furnace.chambers = read_chambers(table);
  table.boolean("line", furnace.line);
  read_gas(table, furnace);
  read_sources(table, furnace);
  read_bounds(table, furnace);

  std::vector<std::string> names;
  for (ConfigTable& each : table.tables("channel")) {
    Channel channel = read_channel(each, furnace);
    claim(each, "name", channel.name, names);
    each.finish();
    furnace.channels.push_back(std::move(channel));
  }
  if (furnace.channels.empty())
    table.require("channel", "without a [[furnace.channel]] nothing can be read from it");

  std::vector<std::string> mappings;
  for (ConfigTable& each : table.tables("csv")) {
    CsvMapping mapping = read_csv_mapping(each, furnace);
    claim(each, "name", mapping.name, mappings);
    each.finish();
    furnace.csv_mappings.push_back(std::move(mapping));
  }
  table.finish();
  return furnace;
}

}  // namespace

Plant read_plant(const std::string& plant_path, const std::string& steels_path, ConfigErrors& errors) {
  Plant plant;
  if (const std::optional<ConfigValue> file = parse_toml_file(plant_path, errors)) {
    ConfigTable root(plant_path, *file, "the file", errors);
    root.require("plant", "it names the plant and says whether it is a demo");
    if (std::optional<ConfigTable> table = root.table("plant")) {
      table->require("name", "it heads every page and report");
      table->text("name", plant.name, 1, 80);
      table->boolean("demo", plant.demo);
      table->text("note", plant.note, 0, 500);
      table->finish();
    }
    std::vector<std::string> ids;
    for (ConfigTable& each : root.tables("furnace")) plant.furnaces.push_back(read_furnace(each, ids));
    if (plant.furnaces.empty()) root.require("furnace", "at least one [[furnace]] is needed");
    root.finish();
  }
  plant.steels = read_steels(steels_path, errors);
  return plant;
}

}  // namespace hearthfront::server
