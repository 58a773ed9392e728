// The plant as the installer describes it: furnaces, chambers, channels, the columns of logger files, and
// the steel library. Plain data, read once at start from TOML (plant.cpp), never changed while running.
// A load copies what it needs, so a later edit of these files never changes a past load.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "server/base/csv_mapping.h"
#include "solver/material/steel.h"

namespace hearthfront::server {

enum class Role { temperature, load_temperature, probe_temperature, probe_emf, carbon_potential, co };
enum class Unit { degc, degf, millivolt, weight_percent, volume_percent };

std::string_view text(Role role);  // "temperature", "load_temperature", ...
std::string_view text(Unit unit);  // "degC", "degF", "mV", "wt_pct", "vol_pct"
std::optional<Role> role_from(std::string_view word);
std::optional<Unit> unit_from(std::string_view word);
bool unit_fits(Role role, Unit unit);
// Between temperature scales; other units only to themselves (throws std::logic_error otherwise).
double convert(double value, Unit from, Unit to);

struct Channel {
  std::string name;
  Role role = Role::temperature;
  Unit unit = Unit::degc;
  std::string chamber;       // id
  double low = 0, high = 0;  // plausible range, in `unit`, both ends allowed
  double expected_interval_s = 60;
  double gap_limit_s = 300;   // a reading speaks for the time after it for so long ...
  double hold_limit_s = 600;  // ... then its value is `held` until so long after it, then `planned`
};

struct Chamber {
  std::string id, name;
};

struct Furnace {
  std::string id, name;
  std::string process = "gas carburizing";
  std::vector<Chamber> chambers;
  double co_fraction = 0.20, h2_fraction = 0.40;  // mole fractions of the carrier gas
  std::optional<double> beta_m_per_s;             // overrides the value from the gas
  double lag_min = 20;
  double total_pressure_bar = 1.01325;
  std::string diffusivity = "agren";  // or "tibbetts"
  std::vector<Channel> channels;
  std::vector<CsvMapping> csv_mappings;

  const Channel* channel(std::string_view name) const;
  const Chamber* chamber(std::string_view id) const;
  const CsvMapping* csv_mapping(std::string_view name) const;
};

struct SteelEntry {
  solver::Steel steel;  // id and mid composition
  std::string standard, number, note;
};

struct Plant {
  std::string name, note;
  bool demo = false;
  std::vector<Furnace> furnaces;
  std::vector<SteelEntry> steels;

  const Furnace* furnace(std::string_view id) const;
  const SteelEntry* steel(std::string_view id) const;
};

// Every mistake of a file at once, each as "file:line:column: what is wrong, what is expected".
struct ConfigErrors {
  std::vector<std::string> messages;
  bool ok() const { return messages.empty(); }
};

// Reads the plant file and the steel library. On errors the returned plant must not be used.
Plant read_plant(const std::string& plant_path, const std::string& steels_path, ConfigErrors& errors);

}  // namespace hearthfront::server
