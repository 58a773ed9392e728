#include "solver/atmosphere/carbon_gas.h"

#include <cmath>

#include "solver/material/activity.h"
#include "solver/material/constants.h"

namespace hearthfront::solver {
namespace {

// R ln(10) / (2F) in mV/K: the slope of emf against log10 of activity.
constexpr double nernst_mv_per_k = 0.099211;
constexpr double oxygen_in_air = 0.2095;  // atm: the reference air stands at the outside's pressure
constexpr double hpa_per_atm = 1013.25;

// CO = C + 1/2 O2, 2CO = C + CO2, CO + H2 = C + H2O.
double log_equilibrium_oxygen(double t) {
  return -5910.5 / t - 4.5558;
}
double log_equilibrium_co2(double t) {
  return 8811.7 / t - 9.0656;
}
double log_equilibrium_water(double t) {
  return 7091.9 / t - 7.4956;
}

double atmospheres(const CarbonGas& gas) {
  return gas.pressure_bar / standard_atmosphere_bar;
}

// Magnus: p = 6.112 hPa exp(factor d / (offset + d)).
struct Magnus {
  double factor, offset_k;
};
constexpr double magnus_hpa = 6.112;
constexpr Magnus magnus(DewSurface surface) {
  return surface == DewSurface::water ? Magnus{17.62, 243.12} : Magnus{22.46, 272.62};
}

// pH2O times activity, atm.
double water_at_unit_activity_atm(double t, const CarbonGas& gas) {
  const double p = atmospheres(gas);
  return std::pow(10.0, log_equilibrium_water(t)) * (gas.co_fraction * p) * (gas.h2_fraction * p);
}

// Emf of a gas of activity 1, in units of the slope.
double log_emf_at_unit_activity(double t, const CarbonGas& gas) {
  return 0.5 * std::log10(oxygen_in_air) - log_equilibrium_oxygen(t) -
         std::log10(gas.co_fraction * atmospheres(gas));
}

}  // namespace

TemperatureRange gas_equilibrium_range() {
  return {1073.0, 1323.0};
}

double carbon_activity_from_emf(double emf_mv, double t, const CarbonGas& gas) {
  return std::pow(10.0, emf_mv / (nernst_mv_per_k * t) - log_emf_at_unit_activity(t, gas));
}

double emf_mv_at_activity(double activity, double t, const CarbonGas& gas) {
  return nernst_mv_per_k * t * (std::log10(activity) + log_emf_at_unit_activity(t, gas));
}

double carbon_activity_from_co2(double co2_fraction, double t, const CarbonGas& gas) {
  return std::pow(10.0, log_equilibrium_co2(t)) * gas.co_fraction * gas.co_fraction * atmospheres(gas) /
         co2_fraction;
}

double co2_fraction_at_activity(double activity, double t, const CarbonGas& gas) {
  return carbon_activity_from_co2(activity, t, gas);  // a x CO2 is a constant of the carrier gas
}

double water_vapour_hpa(double dew_point_degc, DewSurface surface) {
  const Magnus m = magnus(surface);
  return magnus_hpa * std::exp(m.factor * dew_point_degc / (m.offset_k + dew_point_degc));
}

double carbon_activity_from_dew_point(double dew_point_degc, DewSurface surface, double t,
                                      const CarbonGas& gas) {
  return water_at_unit_activity_atm(t, gas) * hpa_per_atm / water_vapour_hpa(dew_point_degc, surface);
}

double dew_point_degc_at_activity(double activity, DewSurface surface, double t, const CarbonGas& gas) {
  const Magnus m = magnus(surface);
  const double log_pressure =
      std::log(water_at_unit_activity_atm(t, gas) * hpa_per_atm / activity / magnus_hpa);
  return m.offset_k * log_pressure / (m.factor - log_pressure);
}

double carbon_potential_wt_pct(double activity, double t) {
  return carbon_at_activity(activity, t);
}

double transfer_ratio(double co, double h2, double reference_co, double reference_h2) {
  return (co * std::sqrt(h2)) / (reference_co * std::sqrt(reference_h2));
}

double transfer_coefficient_m_per_s(double co_fraction, double h2_fraction, double t) {
  constexpr double median = 1.25e-7;
  constexpr double reference_k = 940.0 + zero_celsius_k;
  constexpr double activation_j_mol = 34900.0;
  return median * transfer_ratio(co_fraction, h2_fraction, 0.20, 0.40) *
         std::exp(-activation_j_mol / gas_constant_j_mol_k * (1.0 / t - 1.0 / reference_k));
}

}  // namespace hearthfront::solver
