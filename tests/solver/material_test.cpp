// Material laws against published or independently computed values; where sources disagree, sources_test.cpp.
// "Computed" values were evaluated from the cited formula outside this project, with R = 8.314463 J/mol/K
// (1.987 cal/mol/K), M_C = 12.011, M_Fe = 55.845.
#include <doctest/doctest.h>

#include <cmath>
#include <initializer_list>

#include "solver/material/activity.h"
#include "solver/material/alloy.h"
#include "solver/material/diffusivity.h"
#include "support/cycles.h"

using namespace hearthfront::solver;
using hearthfront::testing::case_steel;

namespace {

constexpr double zero_c = 273.15;
// Printed to four figures: half a unit of the last is at most 5e-4 of the value.
doctest::Approx four_figures(double printed) {
  return doctest::Approx(printed).epsilon(5.1e-4);
}
doctest::Approx within(double value, double tolerance) {
  return doctest::Approx(value).epsilon(tolerance / std::fabs(value));
}

}  // namespace

TEST_CASE("diffusivity: a factor multiplies it and the constant law is constant") {
  const double d = diffusivity_m2_s(diffusivity_form(DiffusivityLaw::agren, 1203.15), 0.6);
  CHECK(diffusivity_m2_s(diffusivity_form(DiffusivityLaw::agren, 1203.15, 0.8), 0.6) ==
        doctest::Approx(0.8 * d).epsilon(1e-14));
  const DiffusivityForm constant = diffusivity_form(DiffusivityLaw::constant, 1203.15, 1.0, 2e-11);
  CHECK(diffusivity_m2_s(constant, 0.0) == 2e-11);
  CHECK(diffusivity_m2_s(constant, 1.3) == 2e-11);
}

TEST_CASE("activity of carbon in austenite: Gustafson 1985, computed from the published constants") {
  struct Row {
    double degc, carbon, activity;
  };
  for (const Row& row :
       {Row{850, 0.8, 0.7251}, Row{850, 1.0, 0.9840}, Row{900, 0.8, 0.5901}, Row{900, 1.0, 0.7984},
        Row{927, 0.4, 0.2279}, Row{927, 0.8, 0.5317}, Row{927, 1.0, 0.7184}, Row{927, 1.2, 0.9321},
        Row{930, 0.8, 0.5258}, Row{930, 1.0, 0.7102}, Row{930, 1.2, 0.9213}, Row{950, 0.8, 0.4884},
        Row{950, 1.0, 0.6590}}) {
    CAPTURE(row.degc);
    CAPTURE(row.carbon);
    const double t = row.degc + zero_c;
    CHECK(carbon_activity(row.carbon, t) == four_figures(row.activity));
    CHECK(carbon_at_activity(carbon_activity(row.carbon, t), t) == within(row.carbon, 1e-11));
  }
}

TEST_CASE("carbon at an activity outside the law's range is the end of the range") {
  CHECK(carbon_at_activity(0.0, 1200.0) == 0.001);
  CHECK(carbon_at_activity(1e6, 1200.0) == 2.6);
}

TEST_CASE("solubility of graphite and cementite in austenite") {
  // Gustafson 1985 with SGTE lattice stabilities; the cementite energy is from memory. Computed.
  struct Row {
    double degc, graphite, cementite;
  };
  for (const Row& row : {Row{800, 0.859, 0.949}, Row{850, 1.012, 1.085}, Row{900, 1.170, 1.228},
                         Row{927, 1.258, 1.308}, Row{930, 1.268, 1.317}, Row{950, 1.334, 1.378},
                         Row{980, 1.434, 1.471}, Row{1000, 1.502, 1.535}, Row{1050, 1.672, 1.701}}) {
    CAPTURE(row.degc);
    CHECK(graphite_limit_wt_pct(row.degc + zero_c) == within(row.graphite, 0.0006));
    // The program's line is a fit good to 0.0013, and the table is rounded.
    CHECK(cementite_limit_wt_pct(row.degc + zero_c) == within(row.cementite, 0.0018));
    CHECK(graphite_limit_wt_pct(row.degc + zero_c) < cementite_limit_wt_pct(row.degc + zero_c));
  }
}

TEST_CASE("alloy factor (Gunnarson 1967, from memory) and its diffusivity factor (radiotracer, 1976)") {
  struct Row {
    const char* steel;
    double k, surface_at_0_8, f_d;  // computed for the middle of each steel's range
  };
  for (const Row& row : {Row{"16MnCr5", 0.9137, 0.8756, 0.898}, Row{"20MnCr5", 0.8943, 0.8945, 0.877},
                         Row{"18CrNiMo7-6", 0.9046, 0.8844, 0.824}, Row{"8620", 0.9738, 0.8216, 0.947},
                         Row{"9310", 1.0060, 0.7952, 0.872}, Row{"4320", 1.0207, 0.7838, 0.947},
                         Row{"20MoCr4", 0.9525, 0.8399, 0.952}, Row{"SCM420", 0.9108, 0.8784, 0.888}}) {
    CAPTURE(row.steel);
    const Composition c = case_steel(row.steel).composition;
    CHECK(alloy_factor_k(c) == within(row.k, 0.00006));
    CHECK(0.8 / alloy_factor_k(c) == within(row.surface_at_0_8, 0.00006));
    CHECK(diffusivity_factor(c) == within(row.f_d, 0.0006));
  }
  CHECK(alloy_factor_k({}) == 1.0);
  CHECK(diffusivity_factor({}) == 1.0);
  Composition stainless;
  stainless.cr_wt_pct = 12;
  CHECK(diffusivity_factor(stainless) == 0.75);  // clipped: the data end at 3.5 at% Cr
}

TEST_CASE("Ae3 of a case steel: Andrews 1965, as quoted in handbooks") {
  CHECK(ae3_degc(case_steel("20MnCr5").composition, 0.195) == within(781.4, 0.1));
  CHECK(ae3_degc({}, 0.25) == within(910.0 - 101.5, 1e-9));
}
