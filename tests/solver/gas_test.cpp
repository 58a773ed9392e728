// From the probe to the carbon potential, against the worked table for 927 degC. Source of the table: the
// NASA polynomials (NASA TM-4513) for the gas, Nernst's equation for the probe, Gustafson 1985 for the steel;
// computed outside this project.
#include <doctest/doctest.h>

#include <cmath>
#include <initializer_list>

#include "solver/atmosphere/carbon_gas.h"
#include "solver/material/activity.h"

using namespace hearthfront::solver;

namespace {

constexpr double t927 = 1200.15, t930 = 1203.15;

double potential_at(double emf_mv, double t, double co) {
  return carbon_potential_from_probe(emf_mv, t, co);
}
double emf_for(double carbon_potential, double t, double co) {
  return emf_mv_from_activity(carbon_activity(carbon_potential, t), t, co);
}

}  // namespace

TEST_CASE("probe: emf of a gas of known carbon potential, 20 % CO") {
  struct Row {
    double t, carbon_potential, emf_mv;
  };
  for (const Row& row :
       {Row{t927, 0.4, 1095.2}, Row{t927, 0.8, 1139.0}, Row{t927, 0.9, 1147.1}, Row{t927, 1.0, 1154.5},
        Row{t927, 1.1, 1161.5}, Row{t927, 1.2, 1168.0}, Row{t930, 0.8, 1139.8}, Row{t930, 1.0, 1155.4},
        Row{t930, 1.1, 1162.3}, Row{t930, 1.2, 1168.9}}) {
    CAPTURE(row.t);
    CAPTURE(row.carbon_potential);
    CHECK(std::fabs(emf_for(row.carbon_potential, row.t, 0.20) - row.emf_mv) < 0.06);
    CHECK(potential_at(emf_for(row.carbon_potential, row.t, 0.20), row.t, 0.20) ==
          doctest::Approx(row.carbon_potential).epsilon(1e-10));
  }
  CHECK(std::fabs(emf_mv_from_activity(1.0, t927, 0.20) - 1171.6) < 0.06);  // soot
  CHECK(std::fabs(emf_mv_from_activity(1.0, t930, 0.20) - 1173.1) < 0.06);
  CHECK(std::fabs(emf_for(0.8, t930, 1.0 / 3.0) - 1113.3) < 0.06);  // methanol gas, 33.3 % CO
}

TEST_CASE("probe: carbon potential from the emf, 927 degC, 20 % CO") {
  CHECK(std::fabs(potential_at(1100, t927, 0.20) - 0.4335) < 6e-5);
  CHECK(std::fabs(potential_at(1120, t927, 0.20) - 0.5989) < 6e-5);
  CHECK(std::fabs(potential_at(1140, t927, 0.20) - 0.8120) < 6e-5);
  CHECK(std::fabs(potential_at(1160, t927, 0.20) - 1.0780) < 6e-5);
}

TEST_CASE("probe: how errors of the inputs move the carbon potential") {
  struct Row {
    double carbon_potential, per_mv, per_k, per_pct_co;  // computed
  };
  for (const Row& row : {Row{0.8, 0.0118, -0.0031, 0.031}, Row{1.1, 0.0149, -0.0042, 0.038}}) {
    CAPTURE(row.carbon_potential);
    const double emf = emf_for(row.carbon_potential, t927, 0.20);
    CHECK(std::fabs(potential_at(emf + 1, t927, 0.20) - row.carbon_potential - row.per_mv) < 1.5e-4);
    CHECK(std::fabs(potential_at(emf, t927 + 1, 0.20) - row.carbon_potential - row.per_k) < 1e-4);
    CHECK(std::fabs(potential_at(emf, t927, 0.21) - row.carbon_potential - row.per_pct_co) < 1e-3);
  }
}

TEST_CASE("transfer coefficient: endothermic gas, its scaling with the gas and with temperature") {
  // Median of German practice tables at 900-950 degC (from memory).
  CHECK(transfer_coefficient_m_per_s(0.20, 0.40, 1213.15) == doctest::Approx(1.25e-7).epsilon(1e-12));
  const double endogas = transfer_coefficient_m_per_s(0.20, 0.40, t930);
  // pCO pH2^0.5 (Grabke's rate law): methanol gas and its 40 % dilution.
  CHECK(transfer_coefficient_m_per_s(1.0 / 3, 2.0 / 3, t930) / endogas ==
        doctest::Approx(2.15).epsilon(0.003));
  CHECK(transfer_coefficient_m_per_s(0.10, 0.20, t930) / endogas == doctest::Approx(0.354).epsilon(0.003));
  // Ratios of 3.47e-6 exp(-34900/(R T)), a textbook line whose origin is not verified.
  const double at930 = 1.060;
  const auto ratio = [&](double degc) {
    return transfer_coefficient_m_per_s(0.20, 0.40, degc + 273.15) / endogas;
  };
  CHECK(ratio(850) == doctest::Approx(0.827 / at930).epsilon(1.1e-3));
  CHECK(ratio(900) == doctest::Approx(0.969 / at930).epsilon(1.1e-3));
  CHECK(ratio(950) == doctest::Approx(1.122 / at930).epsilon(1.1e-3));
  CHECK(ratio(980) == doctest::Approx(1.218 / at930).epsilon(1.1e-3));
}
