// From what is measured in the gas to the carbon potential, against the worked table for 927 degC. Source of
// the table: the NASA polynomials (NASA TM-4513) for the gas, Nernst's equation for the probe, Magnus'
// formula (WMO coefficients) for the dew point, Gustafson 1985 for the steel; computed outside this project.
#include <doctest/doctest.h>

#include <cmath>
#include <functional>
#include <initializer_list>
#include <string>
#include <tuple>

#include "solver/atmosphere/carbon_gas.h"
#include "solver/material/activity.h"

using namespace hearthfront::solver;

namespace {

constexpr double t927 = 1200.15, t930 = 1203.15;
constexpr CarbonGas endogas{0.20, 0.40};
constexpr CarbonGas methanol_gas{1.0 / 3, 2.0 / 3};

double by_emf(double emf_mv, double t, const CarbonGas& gas = endogas) {
  return carbon_potential_wt_pct(carbon_activity_from_emf(emf_mv, t, gas), t);
}
double by_co2(double co2_pct, double t, const CarbonGas& gas = endogas) {
  return carbon_potential_wt_pct(carbon_activity_from_co2(co2_pct / 100, t, gas), t);
}
double by_dew_point(double degc, double t, const CarbonGas& gas = endogas,
                    DewSurface surface = DewSurface::water) {
  return carbon_potential_wt_pct(carbon_activity_from_dew_point(degc, surface, t, gas), t);
}

struct Instruments {
  double emf_mv, co2_pct, h2o_pct, dew_point_degc;
};
Instruments read(double activity, double t, const CarbonGas& gas = endogas) {
  const double dew = dew_point_degc_at_activity(activity, DewSurface::water, t, gas);
  return {emf_mv_at_activity(activity, t, gas), 100 * co2_fraction_at_activity(activity, t, gas),
          water_vapour_hpa(dew, DewSurface::water) / 10.1325, dew};
}

}  // namespace

TEST_CASE("worked table, 927 degC, 20 % CO, 40 % H2, 1 atm: what each instrument reads, and back") {
  struct Row {
    double carbon_potential, activity;
    Instruments reads;
  };
  for (const Row& row :
       {Row{0.4, 0.2279, {1095.2, 0.3318, 0.9098, 5.81}}, Row{0.8, 0.5317, {1139.0, 0.1422, 0.3899, -5.88}},
        Row{0.9, 0.6219, {1147.1, 0.1216, 0.3334, -7.91}}, Row{1.0, 0.7184, {1154.5, 0.1053, 0.2886, -9.76}},
        Row{1.1, 0.8217, {1161.5, 0.0920, 0.2523, -11.46}},
        Row{1.2, 0.9321, {1168.0, 0.0811, 0.2224, -13.03}},
        Row{1.258, 1.0, {1171.6, 0.0756, 0.2073, -13.89}}}) {  // soot
    CAPTURE(row.carbon_potential);
    const double activity = row.activity == soot_activity ? 1.0 : carbon_activity(row.carbon_potential, t927);
    CHECK(std::fabs(activity - row.activity) < 6e-5);
    const Instruments reads = read(activity, t927);
    CHECK(std::fabs(reads.emf_mv - row.reads.emf_mv) < 0.06);
    // The table's CO2 and H2O are of the polynomials, within 0.002 in log10 K of the lines used.
    CHECK(reads.co2_pct == doctest::Approx(row.reads.co2_pct).epsilon(3e-3));
    CHECK(reads.h2o_pct == doctest::Approx(row.reads.h2o_pct).epsilon(3e-3));
    CHECK(std::fabs(reads.dew_point_degc - row.reads.dew_point_degc) < 0.03);
    const double potential = carbon_potential_wt_pct(activity, t927);
    CHECK(std::fabs(potential - row.carbon_potential) < 6e-4);
    CHECK(by_emf(reads.emf_mv, t927) == doctest::Approx(potential).epsilon(1e-10));
    CHECK(by_co2(reads.co2_pct, t927) == doctest::Approx(potential).epsilon(1e-10));
    CHECK(by_dew_point(reads.dew_point_degc, t927) == doctest::Approx(potential).epsilon(1e-10));
  }
}

TEST_CASE("worked table, 930 degC, and a gas of a third CO") {
  struct Row {
    double carbon_potential, emf_mv;
  };
  for (const Row& row : {Row{0.8, 1139.8}, Row{1.0, 1155.4}, Row{1.1, 1162.3}, Row{1.2, 1168.9}})
    CHECK(std::fabs(read(carbon_activity(row.carbon_potential, t930), t930).emf_mv - row.emf_mv) < 0.06);
  CHECK(std::fabs(read(soot_activity, t930).emf_mv - 1173.1) < 0.06);
  const Instruments methanol = read(carbon_activity(0.8, t930), t930, methanol_gas);
  CHECK(std::fabs(methanol.emf_mv - 1113.3) < 0.06);
  CHECK(std::fabs(methanol.co2_pct - 0.383) < 1.5e-3);
  CHECK(std::fabs(methanol.dew_point_degc - 8.0) < 0.06);
}

TEST_CASE("probe: carbon potential from the emf, 927 degC, 20 % CO") {
  CHECK(std::fabs(by_emf(1100, t927) - 0.4335) < 6e-5);
  CHECK(std::fabs(by_emf(1120, t927) - 0.5989) < 6e-5);
  CHECK(std::fabs(by_emf(1140, t927) - 0.8120) < 6e-5);
  CHECK(std::fabs(by_emf(1160, t927) - 1.0780) < 6e-5);
}

TEST_CASE("how errors of the inputs move the carbon potential, 927 degC, 20 % CO") {
  struct Row {
    const char* what;
    double at_0_8, at_1_1, tolerance;  // wt% carbon potential for one unit, as a slope; computed
    std::function<double(const Instruments&, double)> potential;  // with so many units added
  };
  const auto richer = [](double pct) { return CarbonGas{0.20 + pct / 100, 0.40}; };
  for (const Row& row : {
           Row{"mV", 0.0118, 0.0149, 1e-4,
               [](const Instruments&r, double units) { return by_emf(r.emf_mv + units, t927); }},
           Row{"K at fixed mV", -0.0031, -0.0042, 1e-4,
               [](const Instruments&r, double units) { return by_emf(r.emf_mv, t927 + units); }},
           Row{"% CO", 0.031, 0.038, 1e-3,
               [&](const Instruments&r, double units) { return by_emf(r.emf_mv, t927, richer(units)); }},
           Row{"K dew point", -0.046, -0.061, 1e-3,
               [](const Instruments&r, double units) {
                 return by_dew_point(r.dew_point_degc + units, t927);
               }},
           Row{"K furnace at fixed dew point", -0.0046, -0.0058, 1e-4,
               [](const Instruments&r, double units) {
                 return by_dew_point(r.dew_point_degc, t927 + units);
               }},
           Row{"0.01 % CO2", -0.043, -0.084, 1e-3,
               [](const Instruments&r, double units) { return by_co2(r.co2_pct + 0.01 * units, t927); }},
           Row{"K at fixed CO2", -0.0063, -0.0079, 1e-4,
               [](const Instruments&r, double units) { return by_co2(r.co2_pct, t927 + units); }},
       }) {
    CAPTURE(std::string(row.what));
    for (double set : {0.8, 1.1}) {
      const Instruments reads = read(carbon_activity(set, t927), t927);
      const double slope = row.potential(reads, 0.5) - row.potential(reads, -0.5);
      CHECK(std::fabs(slope - (set == 0.8 ? row.at_0_8 : row.at_1_1)) < row.tolerance);
    }
  }
}

TEST_CASE("equilibria: the lines used, against the polynomials and against two circulating sets") {
  // log10 K at 1200.15 K of NASA TM-4513: -1.7245 (2CO = C + CO2), -1.5866 (CO + H2 = C + H2O), -9.4812 (CO =
  // C + 1/2 O2). Handbook lines (from memory): -1.7244, -1.5801, -9.4835. A room-temperature set (from
  // memory): -1.6840, -1.5644, -9.4402: rejected, 0.04 in log10 activity, about 0.058 wt% at 0.8.
  const double log_k_b = std::log10(carbon_activity_from_co2(0.01, t927, {1.0, 1.0})) - 2;
  const double log_k_w = std::log10(carbon_activity_from_dew_point(0, DewSurface::water, t927, {1.0, 1.0})) +
                         std::log10(6.112 / 1013.25);
  const double log_k_o = std::log10(carbon_activity_from_emf(0, t927, {1.0, 1.0})) + 0.5 * std::log10(0.2095);
  CHECK(std::fabs(log_k_b + 1.7245) < 0.002);
  CHECK(std::fabs(log_k_w + 1.5866) < 0.002);
  CHECK(std::fabs(log_k_o + 9.4812) < 0.002);
  CHECK(std::fabs(log_k_b + 1.7244) < 0.007);
  CHECK(std::fabs(log_k_w + 1.5801) < 0.007);
  CHECK(std::fabs(log_k_o + 9.4835) < 0.007);
  const double rejected =
      carbon_at_activity(carbon_activity(0.8, t927) * std::pow(10.0, -1.6840 - log_k_b), t927);
  CHECK(std::fabs(rejected - 0.858) < 1.5e-3);
  CHECK(gas_equilibrium_range().low_k == 1073.0);
  CHECK(gas_equilibrium_range().high_k == 1323.0);
}

TEST_CASE("total pressure: activity is pCO/pO2^0.5, pCO^2/pCO2, pCO pH2/pH2O (law of mass action)") {
  const CarbonGas light{0.20, 0.40, 0.8 * standard_atmosphere_bar};
  // Mole fractions and emf held: pO2 at the probe comes from the emf alone, so a falls as pCO; CO2 as the
  // pressure; the dew point holds pH2O itself, so as the square.
  const auto ratio = [&](auto activity) { return activity(light) / activity(endogas); };
  CHECK(ratio([](const CarbonGas& g) { return carbon_activity_from_emf(1139, t927, g); }) ==
        doctest::Approx(0.8).epsilon(1e-12));
  CHECK(ratio([](const CarbonGas& g) { return carbon_activity_from_co2(0.0014, t927, g); }) ==
        doctest::Approx(0.8).epsilon(1e-12));
  CHECK(ratio([](const CarbonGas& g) {
          return carbon_activity_from_dew_point(-6, DewSurface::water, t927, g);
        }) == doctest::Approx(0.64).epsilon(1e-12));
  CHECK(CarbonGas{}.pressure_bar == 1.01325);
}

TEST_CASE("dew point: vapour over water and over frost") {
  // Saturation pressure over water at 20 degC 23.39 hPa, over ice at -20 degC 1.032 hPa (steam tables, from
  // memory); Magnus' formula is good to 0.4 %. Water and ice meet at 0 degC.
  CHECK(water_vapour_hpa(20, DewSurface::water) == doctest::Approx(23.39).epsilon(4e-3));
  CHECK(water_vapour_hpa(-20, DewSurface::frost) == doctest::Approx(1.032).epsilon(4e-3));
  CHECK(water_vapour_hpa(0, DewSurface::water) == water_vapour_hpa(0, DewSurface::frost));
  // At -6 degC frost and dew differ by 0.7 K, which is 0.03-0.04 wt% (computed).
  const double activity = carbon_activity_from_dew_point(-6, DewSurface::water, t927, endogas);
  const double frost = dew_point_degc_at_activity(activity, DewSurface::frost, t927, endogas);
  CHECK(std::fabs(frost - -6 - 0.7) < 0.06);
  CHECK(std::fabs(by_dew_point(-6, t927, endogas, DewSurface::frost) - by_dew_point(-6, t927) - 0.035) <
        0.005);
  CHECK(carbon_activity_from_dew_point(frost, DewSurface::frost, t927, endogas) ==
        doctest::Approx(activity).epsilon(1e-12));
}

TEST_CASE("transfer coefficient: endothermic gas, its scaling with the gas and with temperature") {
  // Median of German practice tables at 900-950 degC (from memory).
  CHECK(transfer_coefficient_m_per_s(0.20, 0.40, 1213.15) == doctest::Approx(1.25e-7).epsilon(1e-12));
  const double at_930 = transfer_coefficient_m_per_s(0.20, 0.40, t930);
  // pCO pH2^0.5 (Grabke's rate law): methanol gas and its 20 % dilution. The practice tables (from memory)
  // have 2.24 and 0.28, within 25 %; the plainer pCO pH2 would give 2.78 and 0.25.
  for (const auto& [gas, rule, table] :
       {std::tuple{methanol_gas, 2.15, 2.24}, {CarbonGas{0.1, 0.2}, 0.354, 0.28}}) {
    const double ratio = transfer_coefficient_m_per_s(gas.co_fraction, gas.h2_fraction, t930) / at_930;
    CHECK(ratio == doctest::Approx(rule).epsilon(0.003));
    CHECK(std::fabs(ratio / table - 1) < 0.27);
    CHECK(transfer_ratio(gas.co_fraction, gas.h2_fraction, 0.20, 0.40) ==
          doctest::Approx(ratio).epsilon(1e-12));
  }
  // Ratios of 3.47e-6 exp(-34900/(R T)), a textbook line whose origin is not verified.
  const double line_930 = 1.060;
  const auto ratio = [&](double degc) {
    return transfer_coefficient_m_per_s(0.20, 0.40, degc + 273.15) / at_930;
  };
  CHECK(ratio(850) == doctest::Approx(0.827 / line_930).epsilon(1.1e-3));
  CHECK(ratio(900) == doctest::Approx(0.969 / line_930).epsilon(1.1e-3));
  CHECK(ratio(950) == doctest::Approx(1.122 / line_930).epsilon(1.1e-3));
  CHECK(ratio(980) == doctest::Approx(1.218 / line_930).epsilon(1.1e-3));
}
