// The carbon potential that each kind of instrument speaks for, by the equilibria of solver/atmosphere.
#pragma once

#include <optional>
#include <vector>

#include "server/live/lattice.h"

namespace hearthfront::server {

// Means of one stretch of time; empty where nothing is known.
struct CarbonReading {
  double furnace_degc = 0;
  std::optional<double> probe_degc, co_vol_pct, h2_vol_pct, pressure_hpa;
  std::optional<double> value;  // of the source's main channel, in its unit (dew point in degC)
};

// Wt% of plain iron; what is not measured comes from the furnace's settings. Empty where the source says
// nothing, or is too cold to be believed.
std::optional<double> carbon_potential_wt_pct(CarbonSource source, const Furnace& furnace,
                                              const CarbonReading& reading);

// How far the potential that a source gives may be off.
struct SourceDoubt {
  double per_k_wt_pct = 0;  // change with the temperature of the furnace's couple, the reading held
  double sd_wt_pct = 0;     // of the instrument, one sigma
};
// A logged potential is taken to come from a probe. Instruments, one sigma, common practice, no source: probe
// 1.7 mV (which is the 0.025 wt% usually given for a logged potential), CO2 3 % of the reading, dew point 0.7
// K.
SourceDoubt doubt_of(CarbonSource source, const Furnace& furnace, const CarbonReading& reading,
                     double carbon_potential_wt_pct);

std::optional<double> spread_of_measured(const std::vector<SourceValue>& sources);

}  // namespace hearthfront::server
