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

std::optional<double> spread_of_measured(const std::vector<SourceValue>& sources);

}  // namespace hearthfront::server
