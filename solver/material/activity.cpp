#include "solver/material/activity.h"

#include <cmath>

#include "solver/material/constants.h"

namespace hearthfront::solver {
namespace {

constexpr double lowest_wt_pct = 0.001;
constexpr double highest_wt_pct = 2.6;

double log_activity(double carbon, double t) {
  const double y = molar_mass_iron / molar_mass_carbon * carbon / (100.0 - carbon);
  return (77207.0 - 15.877 * t - 34671.0 * (1.0 - 2.0 * y)) / (gas_constant_j_mol_k * t) +
         std::log(y / (1.0 - y));
}

}  // namespace

double carbon_activity(double carbon_wt_pct, double temperature_k) {
  return std::exp(log_activity(carbon_wt_pct, temperature_k));
}

double carbon_at_activity(double activity, double temperature_k) {
  const double target = std::log(activity);
  double low = lowest_wt_pct, high = highest_wt_pct;
  if (!(target > log_activity(low, temperature_k))) return low;
  if (!(target < log_activity(high, temperature_k))) return high;
  // Newton from a dilute guess, kept inside the bracket.
  double carbon = 0.5;
  for (int i = 0; i < 60; ++i) {
    const double miss = log_activity(carbon, temperature_k) - target;
    (miss > 0 ? high : low) = carbon;
    const double y = molar_mass_iron / molar_mass_carbon * carbon / (100.0 - carbon);
    const double dy = molar_mass_iron / molar_mass_carbon * 100.0 / ((100.0 - carbon) * (100.0 - carbon));
    const double slope =
        (2.0 * 34671.0 / (gas_constant_j_mol_k * temperature_k) + 1.0 / (y * (1.0 - y))) * dy;
    double next = carbon - miss / slope;
    if (!(next > low && next < high)) next = 0.5 * (low + high);
    if (std::fabs(next - carbon) < 1e-13) return next;
    carbon = next;
  }
  return carbon;
}

double graphite_limit_wt_pct(double temperature_k) {
  return carbon_at_activity(1.0, temperature_k);
}

double cementite_limit_wt_pct(double temperature_k) {
  const double tau = (temperature_k - zero_celsius_k - 900.0) / 100.0;
  return 1.2276 + 0.2933 * tau + 0.01457 * tau * tau;
}

}  // namespace hearthfront::solver
