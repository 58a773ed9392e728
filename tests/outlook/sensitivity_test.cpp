// What each error of a member does to the base case, all members side by side in one ensemble: unalloyed 0.20
// wt% C steel, 930 degC, beta 1.3e-7 m/s, boost 4.0 h at 1.10 and diffuse 1.5 h at 0.80 wt%, Agren's D. The
// table was computed outside this project by two independent solvers (tests/validation/base_case_test.cpp has
// the same by changed inputs).
#include <doctest/doctest.h>

#include <cmath>
#include <string>
#include <vector>

#include "solver/solver.h"
#include "support/cycles.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

constexpr double believed_k = 930 + 273.15;

// Carbon potential of a gas that a probe at 930 degC reads as `set`, when the emf is off by so much, or the
// probe is hotter than its couple says and the emf stands.
double potential_after(double set, double true_offset_k, double emf_offset_mv) {
  const CarbonGas gas;
  const double emf = emf_mv_at_activity(carbon_activity(set, believed_k), believed_k, gas) + emf_offset_mv;
  const double read_at = believed_k + true_offset_k;
  return carbon_potential_wt_pct(carbon_activity_from_emf(emf, read_at, gas), read_at);
}

struct Depths {
  double at_035, at_040, total, surface_wt_pct;
};

struct Stage {
  double hours, potential;
};

// One ensemble through boost and diffuse. In each stage the doubts are: two millivolts of the probe, 10 K of
// the couple at a held emf, and 0.05 wt% under the name of a gap in boost and of the future in diffuse, so
// that a member may have either or both.
std::vector<Depths> cycle(const std::vector<Member>& members, double time_scale = 1, double lost_s = 0) {
  CarburizingPart part;
  part.section = {Shape::plate, 10e-3, 0};
  part.core_carbon_wt_pct = 0.20;
  part.beta_m_per_s = 1.3e-7;
  part.lag_s = 0;
  MeshDensity density;
  density.diffusion_length_m = 1.2e-3;
  const GasCarburizing model(part, density, members);
  GasCarburizing::State state = model.start(930);
  GasCarburizing::Workspace workspace(model);
  const Stage stages[] = {{4.0, 1.10}, {1.5, 0.80}};
  for (const Stage& stage : stages) {
    const bool boost = stage.potential > 1;
    IntervalInputs in;
    in.duration_s = 60 * time_scale;
    in.furnace_temperature_degc = 930;
    in.carbon_potential_wt_pct = stage.potential;
    in.doubt.carbon_source_sd_wt_pct = potential_after(stage.potential, 0, 2) - stage.potential;
    in.doubt.carbon_potential_per_k = (potential_after(stage.potential, 10, 0) - stage.potential) / 10;
    (boost ? in.doubt.carbon_potential_gap_sd_wt_pct : in.doubt.future_carbon_potential_sd_wt_pct) = 0.05;
    const double length_s = stage.hours * 3600 - (boost ? lost_s : 0);
    for (int minute = 0; minute < std::lround(length_s / 60); ++minute)
      REQUIRE(model.advance(state, in, workspace).kind == OutcomeKind::reached);
  }
  std::vector<Depths> depths;
  for (std::size_t lane = 0; lane < members.size(); ++lane) {
    const Profile profile = read_profile(state.field, lane, state.conditions[lane]);
    const auto depth_mm = [&](double limit) { return 1e3 * depth_at_carbon_m(profile, limit).value(); };
    depths.push_back(
        {depth_mm(0.35), depth_mm(0.40),
         depth_mm(0.20 + members[lane].core_carbon_offset_wt_pct + total_depth_above_core_wt_pct),
         profile.carbon_wt_pct.front()});
  }
  return depths;
}

struct Row {
  std::string what;
  Member member;
  double at_035, at_040, total;  // % of the base case
  double surface_wt_pct = 0;     // 0: not stated
  // Where the table itself is further from this solver and from CVODE, which agree (base_case_test.cpp).
  double table_off = 0;
};

Member with(double Member::*what, double value) {
  Member member;
  member.*what = value;
  return member;
}

void check(const Row& row, const Depths& base, const Depths& got) {
  CAPTURE(row.what);
  // Printed to 0.01 % on a base case rounded to 5e-6 mm: 0.03 percent points, or 0.5 % of it. Surface carbon
  // is printed to 0.001 wt%.
  const auto check_one = [&](double changed, double base_value, double printed) {
    const double percent = 100 * (changed / base_value - 1);
    CAPTURE(percent);
    CHECK(std::fabs(percent - printed) < 0.03 + 0.005 * std::fabs(printed) + row.table_off);
    CHECK(percent * printed > 0);
  };
  check_one(got.at_035, base.at_035, row.at_035);
  check_one(got.at_040, base.at_040, row.at_040);
  check_one(got.total, base.total, row.total);
  if (row.surface_wt_pct > 0) CHECK(std::fabs(got.surface_wt_pct - row.surface_wt_pct) < 7e-4);
}

}  // namespace

TEST_CASE("members of one ensemble: each error moves depths and surface carbon as tabled") {
  Member rich, poor;
  rich.carbon_potential_gap_error = rich.future_carbon_potential_error = 1;
  poor.carbon_potential_gap_error = poor.future_carbon_potential_error = -1;
  // The furnace's couple alone moves the carbon potential too; position in the chamber does not.
  const std::vector<Row> rows{
      {"T +1 K", with(&Member::temperature_offset_k, 1), 0.50, 0.49, 0.55, 0.7596},
      {"T -1 K", with(&Member::temperature_offset_k, -1), -0.51, -0.49, -0.53},
      {"T +10 K", with(&Member::temperature_offset_k, 10), 5.12, 4.94, 5.50, 0.757},
      {"T -10 K", with(&Member::temperature_offset_k, -10), -4.98, -4.82, -5.31, 0.763},
      {"couple reads 10 K low, probe's emf held", with(&Member::thermocouple_offset_k, 10), 2.31, 1.39, 3.99,
       0.729, 0.06},
      {"Cp +0.05", rich, 3.08, 3.90, 1.65, 0.803},
      {"Cp -0.05", poor, -3.27, -4.17, -1.72, 0.717},
      {"Cp +0.05 throughout", with(&Member::carbon_potential_offset_wt_pct, 0.05), 3.08, 3.90, 1.65, 0.803},
      {"Cp +0.05 in boost", with(&Member::carbon_potential_gap_error, 1), 2.95, 3.60, 1.65, 0.766},
      {"Cp +0.05 in diffuse", with(&Member::future_carbon_potential_error, 1), 0.16, 0.35, 0.01, 0.797},
      {"probe +2 mV", with(&Member::carbon_source_error, 1), 1.84, 2.31, 1.00, 0.781},
      {"beta x 2", with(&Member::beta_scale, 2), 7.23, 8.47, 4.68, 0.782},
      {"beta x 0.5", with(&Member::beta_scale, 0.5), -11.27, -13.42, -6.96, 0.711},
      {"beta x 1.25", with(&Member::beta_scale, 1.25), 2.72, 3.20, 1.74, 0.769},
      {"beta x 0.8", with(&Member::beta_scale, 0.8), -3.15, -3.72, -1.97, 0.748},
      {"core +0.02", with(&Member::core_carbon_offset_wt_pct, 0.02), 4.99, 4.48, 0.26, 0.762},
      {"core -0.02", with(&Member::core_carbon_offset_wt_pct, -0.02), -4.44, -4.09, -0.27, 0.758},
      {"D x 1.1", with(&Member::diffusivity_scale, 1.1), 4.21, 4.10, 4.47},
      {"D x 0.9", with(&Member::diffusivity_scale, 0.9), -4.49, -4.37, -4.72},
      {"D x 0.8", with(&Member::diffusivity_scale, 0.8), -9.30, -9.07, -9.75},
  };
  std::vector<Member> members{Member{}};
  for (const Row& row : rows) members.push_back(row.member);
  const std::vector<Depths> depths = cycle(members);
  // The base case as printed.
  CHECK(std::fabs(depths[0].at_035 - 1.00745) < 0.3e-3);
  CHECK(std::fabs(depths[0].at_040 - 0.88875) < 0.3e-3);
  CHECK(std::fabs(depths[0].total - 1.41777) < 0.3e-3);
  for (std::size_t i = 0; i < rows.size(); ++i) check(rows[i], depths[0], depths[i + 1]);
}

TEST_CASE("the same of time: longer, shorter, the beginning of boost lost") {
  // Two lanes, so that the ensemble's own path is taken.
  const std::vector<Member> two(2);
  const Depths base = cycle(two)[1];
  check({"time x 1.1", {}, 5.53, 5.65, 5.29, 0.762}, base, cycle(two, 1.1)[1]);
  check({"time x 0.9", {}, -5.80, -5.92, -5.55, 0.757}, base, cycle(two, 0.9)[1]);
  check({"15 min of boost lost", {}, -2.78, -2.97, -2.51, 0.757}, base, cycle(two, 1, 900)[1]);
  check({"30 min of boost lost", {}, -5.65, -6.03, -5.07, 0.755}, base, cycle(two, 1, 1800)[1]);
}
