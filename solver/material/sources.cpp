#include "solver/material/sources.h"

#include <algorithm>
#include <cmath>

#include "solver/material/activity.h"
#include "solver/material/alloy.h"
#include "solver/material/constants.h"
#include "solver/material/diffusivity.h"
#include "solver/material/martensite.h"

namespace hearthfront::solver {
namespace {

constexpr double gas_constant_cal = 1.987;  // cal/mol/K, for sources in that unit

double mole_fraction(double carbon) {
  const double atoms = carbon / molar_mass_carbon;
  return atoms / (atoms + (100.0 - carbon) / molar_mass_iron);
}

// Atoms of carbon for each atom of iron.
double site_ratio(double carbon) {
  return molar_mass_iron / molar_mass_carbon * carbon / (100.0 - carbon);
}

double lee_m2_s(double c, double t) {
  return (0.146 - 0.036 * c) * 1e-4 *
         std::exp(-(144300.0 - 15000.0 * c + 370.0 * c * c) / (gas_constant_j_mol_k * t));
}

double slycke_ericsson_m2_s(double c, double t) {
  const double x = mole_fraction(c);
  return 4.84e-5 * std::exp(-38.49 * x) / (1.0 - 5.0 * x) *
         std::exp(-(155000.0 - 570000.0 * x) / (gas_constant_j_mol_k * t));
}

double wells_mehl_m2_s(double c, double t) {
  return (0.07 + 0.06 * c) * 1e-4 * std::exp(-32000.0 / (gas_constant_cal * t));
}

double stickels_m2_s(double t) {
  return 16.2e-6 * std::exp(-137800.0 / (gas_constant_j_mol_k * t));
}

double log10_activity_ellis(double c, double t) {
  return 2300.0 / t - 2.21 + 0.15 * c + std::log10(c);
}

double log10_activity_banya(double c, double t) {
  const double y = site_ratio(c), z = y / (1.0 - y);
  return std::log10(z) + 2300.0 / t - 0.92 + 3860.0 * y / t;
}

template <class LogActivity>
double carbon_where(LogActivity log_activity, double activity, double t) {
  const double target = std::log10(activity);
  double low = 0.001, high = 2.6;
  while (high - low > 1e-12) {
    const double middle = 0.5 * (low + high);
    (log_activity(middle, t) < target ? low : high) = middle;
  }
  return 0.5 * (low + high);
}

bool within(const TemperatureRange& range, double t) {
  return t >= range.low_k && t <= range.high_k;
}

double alloy_factor_neumann_person(const Composition& s) {
  return 1.0 + s.si_wt_pct * (0.15 + 0.033 * s.si_wt_pct) - 0.0365 * s.mn_wt_pct -
         s.cr_wt_pct * (0.13 - 0.0055 * s.cr_wt_pct) + s.ni_wt_pct * (0.03 + 0.00365 * s.ni_wt_pct) -
         s.mo_wt_pct * (0.025 - 0.01 * s.mo_wt_pct);
}

double ms_andrews(const Composition& s, double c) {
  return 539.0 - 423.0 * c - 30.4 * s.mn_wt_pct - 17.7 * s.ni_wt_pct - 12.1 * s.cr_wt_pct - 7.5 * s.mo_wt_pct;
}

double ms_steven_haynes(const Composition& s, double c) {
  return 561.0 - 474.0 * c - 33.0 * s.mn_wt_pct - 17.0 * s.ni_wt_pct - 17.0 * s.cr_wt_pct -
         21.0 * s.mo_wt_pct;
}

double ms_capdevila(const Composition& s, double c) {
  return 764.2 - 302.6 * c - 30.6 * s.mn_wt_pct - 16.6 * s.ni_wt_pct - 8.9 * s.cr_wt_pct + 2.4 * s.mo_wt_pct -
         14.5 * s.si_wt_pct - zero_celsius_k;
}

double left_of_austenite(double rate_per_k, double ms_degc, double quench_degc) {
  return std::exp(-rate_per_k * std::max(0.0, ms_degc - quench_degc));
}

constexpr double linear_ms_below_wt_pct = 0.6;

}  // namespace

std::array<SourceValue, 6> diffusivity_by_source(double c, double t) {
  const auto own = [&](DiffusivityLaw law) { return diffusivity_m2_s(diffusivity_form(law, t), c); };
  const TemperatureRange carburizing{1073.15, 1323.15}, wells_mehl{1023.15, 1523.15};
  const bool usual = within(carburizing, t);
  return {{{"Agren 1986", own(DiffusivityLaw::agren), within(diffusivity_range(DiffusivityLaw::agren), t)},
           {"Tibbetts 1980", own(DiffusivityLaw::tibbetts),
            within(diffusivity_range(DiffusivityLaw::tibbetts), t) && c <= 1.3},
           {"Lee, Matlock, Van Tyne 2011", lee_m2_s(c, t), usual},
           {"Slycke, Ericsson 1981", slycke_ericsson_m2_s(c, t), usual},
           {"Wells, Mehl 1940", wells_mehl_m2_s(c, t), within(wells_mehl, t) && c <= 1.4},
           {"Stickels (ASM Handbook 4)", stickels_m2_s(t), usual}}};
}

std::array<SourceValue, 3> carbon_activity_by_source(double c, double t) {
  const bool austenite = within({1000.0, 1430.0}, t);
  return {{{"Gustafson 1985", carbon_activity(c, t), austenite},
           {"Ellis, Davidson, Bodsworth 1963", std::pow(10.0, log10_activity_ellis(c, t)), c <= 1.3},
           {"Ban-ya, Elliott, Chipman 1970", std::pow(10.0, log10_activity_banya(c, t)), austenite}}};
}

std::array<SourceValue, 3> carbon_potential_by_source(double activity, double t) {
  const bool austenite = within({1000.0, 1430.0}, t);
  const double ellis = carbon_where(log10_activity_ellis, activity, t);
  return {{{"Gustafson 1985", carbon_at_activity(activity, t), austenite},
           {"Ellis, Davidson, Bodsworth 1963", ellis, ellis <= 1.3},
           {"Ban-ya, Elliott, Chipman 1970", carbon_where(log10_activity_banya, activity, t), austenite}}};
}

std::array<SourceValue, 2> alloy_factor_by_source(const Composition& steel) {
  const bool low_alloy = in_low_alloy_range(steel);
  return {{{"Gunnarson 1967", alloy_factor_k(steel), low_alloy},
           {"Neumann, Person 1968", alloy_factor_neumann_person(steel), low_alloy}}};
}

std::array<SourceValue, 4> martensite_start_by_source(const Composition& steel, double c) {
  const bool low_alloy = in_low_alloy_range(steel);
  const bool linear = low_alloy && c < linear_ms_below_wt_pct;
  return {{{"van Bohemen 2012", martensite_start_degc(steel, c),
            low_alloy && c <= martensite_start_highest_carbon_wt_pct},
           {"Andrews 1965", ms_andrews(steel, c), linear},
           {"Steven, Haynes 1956", ms_steven_haynes(steel, c), linear},
           {"Capdevila 2002", ms_capdevila(steel, c), linear}}};
}

std::array<SourceValue, 3> retained_austenite_by_source(const Composition& s, double c, double quench_degc) {
  const bool low_alloy = in_low_alloy_range(s);
  const bool rich = low_alloy && c <= martensite_start_highest_carbon_wt_pct;
  const double own_rate_per_k =
      1e-3 * (27.2 - 0.14 * s.mn_wt_pct - 0.21 * s.si_wt_pct - 0.11 * s.cr_wt_pct - 0.08 * s.ni_wt_pct -
              0.05 * s.mo_wt_pct - 19.8 * (1.0 - std::exp(-1.56 * c)));
  return {
      {{"Koistinen, Marburger 1959; Ms van Bohemen", retained_austenite_fraction(s, c, quench_degc), rich},
       {"Koistinen, Marburger 1959; Ms Andrews", left_of_austenite(0.011, ms_andrews(s, c), quench_degc),
        low_alloy && c < linear_ms_below_wt_pct},
       {"van Bohemen 2012", left_of_austenite(own_rate_per_k, martensite_start_degc(s, c), quench_degc),
        rich}}};
}

}  // namespace hearthfront::solver
