#include "server/live/carbon_sources.h"

#include <algorithm>
#include <cmath>

#include "solver/atmosphere/carbon_gas.h"
#include "solver/material/activity.h"
#include "solver/material/constants.h"

namespace hearthfront::server {
namespace {

// Below this an oxygen probe's electrolyte does not conduct well enough to be believed (common practice, no
// source), and no gas is near its equilibrium; carbon transport is paused there anyway.
constexpr double believed_from_degc = 700.0;

solver::CarbonGas gas_of(const Furnace& furnace, const CarbonReading& reading) {
  solver::CarbonGas gas;
  gas.co_fraction = reading.co_vol_pct.value_or(furnace.co_fraction * 100.0) / 100.0;
  gas.h2_fraction = reading.h2_vol_pct.value_or(furnace.h2_fraction * 100.0) / 100.0;
  gas.pressure_bar = reading.pressure_hpa ? *reading.pressure_hpa * 1e-3 : furnace.total_pressure_bar;
  return gas;
}

}  // namespace

std::optional<double> carbon_potential_wt_pct(CarbonSource source, const Furnace& furnace,
                                              const CarbonReading& reading) {
  if (!reading.value) return std::nullopt;
  const double value = *reading.value;
  if (source == CarbonSource::logged) return value;
  const double degc = source == CarbonSource::probe_emf ? reading.probe_degc.value_or(reading.furnace_degc)
                                                        : reading.furnace_degc;
  const double t_k = degc + solver::zero_celsius_k;
  const solver::CarbonGas gas = gas_of(furnace, reading);
  if (degc < believed_from_degc || gas.co_fraction <= 0) return std::nullopt;
  double activity = 0;
  switch (source) {
    case CarbonSource::logged:
      break;
    case CarbonSource::probe_emf:
      activity = solver::carbon_activity_from_emf(value, t_k, gas);
      break;
    case CarbonSource::co2:
      if (value <= 0) return std::nullopt;
      activity = solver::carbon_activity_from_co2(value / 100.0, t_k, gas);
      break;
    case CarbonSource::dew_point:
      if (gas.h2_fraction <= 0) return std::nullopt;
      activity = solver::carbon_activity_from_dew_point(
          value, furnace.dew_over_frost ? solver::DewSurface::frost : solver::DewSurface::water, t_k, gas);
      break;
  }
  return solver::carbon_potential_wt_pct(activity, t_k);
}

SourceDoubt doubt_of(CarbonSource source, const Furnace& furnace, const CarbonReading& reading,
                     double potential) {
  SourceDoubt doubt;
  CarbonReading moved = reading;
  if (source == CarbonSource::logged) {
    // The emf that the controller must have seen.
    const double t_k = reading.probe_degc.value_or(reading.furnace_degc) + solver::zero_celsius_k;
    doubt.sd_wt_pct = furnace.carbon_potential_sd_wt_pct;
    if (t_k - solver::zero_celsius_k < believed_from_degc || potential <= 0) return doubt;
    const solver::CarbonGas gas = gas_of(furnace, reading);
    const double activity = solver::carbon_activity(std::min(potential, 2.6), t_k);
    moved.value = solver::emf_mv_at_activity(activity, t_k, gas);
    source = CarbonSource::probe_emf;
  }
  const auto change = [&](const CarbonReading& other) {
    return carbon_potential_wt_pct(source, furnace, other).value_or(potential) - potential;
  };
  CarbonReading off = moved;
  if (source == CarbonSource::probe_emf)
    *off.value += 1.7;
  else if (source == CarbonSource::co2)
    *off.value *= 1.03;
  else
    *off.value += 0.7;
  if (doubt.sd_wt_pct <= 0) doubt.sd_wt_pct = std::fabs(change(off));
  CarbonReading hotter = moved;
  hotter.furnace_degc += 1;
  if (hotter.probe_degc) *hotter.probe_degc += 1;
  const double per_k = change(hotter);
  // A probe with a couple of its own errs by itself, not with the furnace's.
  if (source == CarbonSource::probe_emf && reading.probe_degc)
    doubt.sd_wt_pct = std::hypot(doubt.sd_wt_pct, per_k * furnace.thermocouple_tolerance_k / std::sqrt(3.0));
  else
    doubt.per_k_wt_pct = per_k;
  return doubt;
}

std::optional<double> spread_of_measured(const std::vector<SourceValue>& sources) {
  std::optional<double> low, high;
  int count = 0;
  for (const SourceValue& each : sources) {
    if (each.basis != Basis::measured) continue;
    low = std::min(low.value_or(each.carbon_potential_wt_pct), each.carbon_potential_wt_pct);
    high = std::max(high.value_or(each.carbon_potential_wt_pct), each.carbon_potential_wt_pct);
    ++count;
  }
  return count < 2 ? std::nullopt : std::optional(*high - *low);
}

}  // namespace hearthfront::server
