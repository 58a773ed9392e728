// The plant as the installer describes it: furnaces, chambers, channels, the columns of logger files, and
// the steel library. Plain data, read once at start from TOML (plant.cpp), never changed while running.
// A load copies what it needs, so a later edit of these files never changes a past load.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "server/base/csv_mapping.h"
#include "solver/material/steel.h"

namespace hearthfront::server {

enum class Role {
  temperature,
  load_temperature,
  probe_temperature,
  probe_emf,
  carbon_potential,
  co,
  h2,
  co2,
  dew_point,
  pressure,  // of the furnace gas, absolute
  push       // of a pusher line: a contact or counter whose value rises with each push
};
enum class Unit { degc, degf, millivolt, weight_percent, volume_percent, hectopascal, count };

std::string_view text(Role role);  // "temperature", "load_temperature", ...
std::string_view text(Unit unit);  // "degC", "degF", "mV", "wt_pct", "vol_pct", "hPa", "count"
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

// A chamber, or a zone of a pusher line.
struct Chamber {
  std::string id, name;
  int places = 1;  // loads (trays) it holds at a time
};

// What the carbon potential can be computed from, in the order a furnace trusts them.
enum class CarbonSource : std::uint8_t { logged, probe_emf, co2, dew_point };
std::string_view text(CarbonSource source);  // "logged", "probe emf", "CO2", "dew point"
std::string_view key(CarbonSource source);   // "logged", "probe_emf", "co2", "dew_point"
Role role_of(CarbonSource source);           // of its main channel

struct Furnace {
  std::string id, name;
  std::string process = "gas carburizing";
  std::vector<Chamber> chambers;
  double co_fraction = 0.20, h2_fraction = 0.40;  // mole fractions of the carrier gas
  std::optional<double> beta_m_per_s;             // overrides the value from the gas
  double lag_min = 20;
  double total_pressure_bar = 1.01325;
  std::string diffusivity = "agren";  // or "tibbetts"
  bool line = false;                  // a pusher line: its chambers are zones, trays go through them in order
  bool dew_over_frost = false;        // what a dew-point mirror shows below 0 degC
  std::vector<CarbonSource> carbon_sources{CarbonSource::logged, CarbonSource::probe_emf, CarbonSource::co2,
                                           CarbonSource::dew_point};
  double source_tolerance_wt_pct = 0.08;  // sources further apart than this disagree
  // How well it is known, for the band: solver/outlook/draws.h says where the defaults are from.
  double thermocouple_tolerance_k = 3.7;      // by the couple's class at working temperature, +/-
  double uniformity_k = 6;                    // by the last survey, +/-
  double carbon_potential_sd_wt_pct = 0.025;  // of a logged carbon potential, one sigma
  // What a proposal may ask of it.
  double highest_temperature_degc = 950;
  double highest_carbon_potential_wt_pct = 1.25;
  std::vector<Channel> channels;
  std::vector<CsvMapping> csv_mappings;

  const Channel* channel(std::string_view name) const;
  const Chamber* chamber(std::string_view id) const;
  const CsvMapping* csv_mapping(std::string_view name) const;
  int places() const;  // of all chambers
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
