#include "solver/atmosphere/carbon_gas.h"

#include <cmath>

#include "solver/material/activity.h"
#include "solver/material/constants.h"

namespace hearthfront::solver {
namespace {

// R ln(10) / (2F) in mV/K: the slope of emf against log10 of activity.
constexpr double nernst_mv_per_k = 0.099211;
constexpr double oxygen_in_air = 0.2095;

double log_equilibrium_co(double t) {
  return -5910.5 / t - 4.5558;
}

}  // namespace

double activity_from_probe(double emf_mv, double t, double co_atm) {
  return std::pow(10.0, emf_mv / (nernst_mv_per_k * t) + log_equilibrium_co(t) + std::log10(co_atm) -
                            0.5 * std::log10(oxygen_in_air));
}

double emf_mv_from_activity(double activity, double t, double co_atm) {
  return nernst_mv_per_k * t *
         (std::log10(activity) - log_equilibrium_co(t) - std::log10(co_atm) +
          0.5 * std::log10(oxygen_in_air));
}

double carbon_potential_from_probe(double emf_mv, double t, double co_atm) {
  return carbon_at_activity(activity_from_probe(emf_mv, t, co_atm), t);
}

double transfer_coefficient_m_per_s(double co_fraction, double h2_fraction, double t) {
  constexpr double median = 1.25e-7;
  constexpr double reference_k = 940.0 + zero_celsius_k;
  constexpr double activation_j_mol = 34900.0;
  return median * (co_fraction * std::sqrt(h2_fraction)) / (0.20 * std::sqrt(0.40)) *
         std::exp(-activation_j_mol / gas_constant_j_mol_k * (1.0 / t - 1.0 / reference_k));
}

}  // namespace hearthfront::solver
