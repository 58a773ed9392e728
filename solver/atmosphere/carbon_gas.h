// From what is measured in a carburizing gas to its carbon activity and carbon potential, and how fast it
// gives carbon. Three measurements stand beside each other; each needs what the others do not tell:
//   oxygen probe   CO  = C + 1/2 O2    a = K_O pCO / pO2^(1/2)     needs CO
//   CO2            2CO = C + CO2       a = K_B pCO^2 / pCO2        needs CO
//   dew point      CO + H2 = C + H2O   a = K_W pCO pH2 / pH2O      needs CO and H2
//
// Equilibria, p in atm:
//   log10 K_O = -5910.5/T - 4.5558, log10 K_B = 8811.7/T - 9.0656, log10 K_W = 7091.9/T - 7.4956:
//   linear fits for 1073-1323 K (within 0.002) to the NASA polynomials of NASA TM-4513. Lines fitted from
//   room temperature upward also circulate; at 927 degC they are 10 % high in activity.
// Probe: Nernst's equation against dry air at one atmosphere (20.95 % O2).
// Dew point: Magnus' formula with the coefficients of the WMO (-40 to 50 degC, within 0.4 %); over frost from
//   memory. Below 0 degC a mirror may show either: at -6 degC they differ by 0.7 K, which is 0.04 wt%.
// Transfer coefficient: median of German practice tables for 900-950 degC (from memory) scaled by
//   pCO pH2^0.5 (H. J. Grabke's rate law for the CO + H2 path); temperature ratio exp(-34900/(R T)) from
//   textbook use (origin not verified), 1 at 940 degC. Expect a factor 1.4 (one sigma) around it.
#pragma once

#include "solver/material/diffusivity.h"

namespace hearthfront::solver {

inline constexpr double standard_atmosphere_bar = 1.01325;

// Carrier gas: mole fractions 0.01-0.9, total pressure in the furnace 0.5-2 bar.
struct CarbonGas {
  double co_fraction = 0.20, h2_fraction = 0.40;
  double pressure_bar = standard_atmosphere_bar;
};

// What the mirror of a dew point instrument is covered with.
enum class DewSurface { water, frost };

// Where the equilibria above were fitted. Outside they are extrapolated: say so.
TemperatureRange gas_equilibrium_range();

// Graphite (soot) is stable above activity 1. Furnaces are run below about 0.95 (common practice, no source).
inline constexpr double soot_activity = 1.0;
inline constexpr double highest_working_activity = 0.95;

// Carbon activity, graphite = 1. emf 0-1400 mV, probe 970-1330 K.
double carbon_activity_from_emf(double emf_mv, double probe_temperature_k, const CarbonGas& gas);
// co2_fraction above 0.
double carbon_activity_from_co2(double co2_fraction, double temperature_k, const CarbonGas& gas);
// Dew point -40 to 50 degC, measured at the furnace's pressure.
double carbon_activity_from_dew_point(double dew_point_degc, DewSurface surface, double temperature_k,
                                      const CarbonGas& gas);

// Their inverses: what each instrument reads in a gas of that activity (above 0).
double emf_mv_at_activity(double activity, double probe_temperature_k, const CarbonGas& gas);
double co2_fraction_at_activity(double activity, double temperature_k, const CarbonGas& gas);
double dew_point_degc_at_activity(double activity, DewSurface surface, double temperature_k,
                                  const CarbonGas& gas);

// Saturation pressure of water vapour.
double water_vapour_hpa(double dew_point_degc, DewSurface surface);

// Carbon content of plain iron in equilibrium with the gas: `carbon_at_activity` (material/activity.h). An
// activity at a probe gives the potential there; the part's own temperature enters by the surface law.
double carbon_potential_wt_pct(double activity, double temperature_k);

// beta of flux = beta (Cp - k C_s), m/s, near one atmosphere; mole fractions of the carrier gas 0.02-0.9.
double transfer_coefficient_m_per_s(double co_fraction, double h2_fraction, double temperature_k);

// What a measured gas does to beta beside another one: the ratio of pCO pH2^0.5.
double transfer_ratio(double co_fraction, double h2_fraction, double reference_co_fraction,
                      double reference_h2_fraction);

}  // namespace hearthfront::solver
