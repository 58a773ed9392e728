// What a part may go through besides gas at temperature: a film at the start, measured gas, time outside gas.
// Sources are named at each case; "identity" means that it follows from the equations.
#include <doctest/doctest.h>

#include <cmath>
#include <initializer_list>
#include <limits>

#include "support/cycles.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

CarburizingPart part_of(const char* steel) {
  CarburizingPart part;
  part.steel = case_steel(steel).composition;
  part.core_carbon_wt_pct = part.steel.c_wt_pct;
  return part;
}

GasCarburizing::State after(const CarburizingPart& part, const std::vector<IntervalInputs>& inputs,
                            double start_degc = 930) {
  const GasCarburizing model(part, MeshDensity{});
  GasCarburizing::State state = model.start(start_degc);
  REQUIRE(run(model, state, inputs).kind != OutcomeKind::failed);
  return state;
}

Profile profile_of(const GasCarburizing::State& state) {
  return read_profile(state.field, 0, state.conditions[0]);
}

double crossed_mm(const GasCarburizing::State& state) {
  return 1e3 * state.field.crossed_wt_pct_m[0];
}

double residual(const GasCarburizing::State& state) {
  return std::fabs(balance_residual(state.field, 0, state.initial_wt_pct_m[0]));
}

std::vector<IntervalInputs> without_gas(std::vector<IntervalInputs> inputs) {
  for (IntervalInputs& in : inputs) in.gas = false;
  return inputs;
}

void append(std::vector<IntervalInputs>& all, const std::vector<IntervalInputs>& more) {
  all.insert(all.end(), more.begin(), more.end());
}

}  // namespace

TEST_CASE(
    "a film on the surface hinders uptake, the longer it lasts; carbon is conserved (common practice, no "
    "source)") {
  const auto inputs = constant_inputs(2 * 3600, 930, 1.0);
  double before = std::numeric_limits<double>::infinity();
  for (double film_s : {0.0, 120.0, 600.0, 1800.0, 7200.0}) {
    CarburizingPart part = part_of("16MnCr5");
    part.film_s = film_s;
    const GasCarburizing::State state = after(part, inputs);
    CHECK(crossed_mm(state) < before);
    CHECK(residual(state) < 1e-12);
    before = crossed_mm(state);
  }
}

TEST_CASE("a film delays by its time constant: late in the cycle, uptake as without it that much earlier") {
  // While the surface is far from the gas the uptake follows int beta dt = beta (t - t0) (identity for a
  // surface that stays at core carbon; the surface's own rise makes the film cost less, so t0 is the upper
  // bound).
  CarburizingPart slow = part_of("8620");
  slow.beta_m_per_s = 1e-9;  // the surface hardly rises
  const auto hour = constant_inputs(3600, 930, 1.0);
  const double clean = crossed_mm(after(slow, hour));
  slow.film_s = 300;
  const double filmed = crossed_mm(after(slow, hour));
  CHECK(filmed / clean == doctest::Approx(1 - 300.0 / 3600 * (1 - std::exp(-12.0))).epsilon(1e-3));
}

TEST_CASE("a film's share of beta is the exact mean over an interval, however the time is cut") {
  CarburizingPart part = part_of("8620");
  part.beta_m_per_s = 1e-9;
  part.film_s = 600;
  const double fine = crossed_mm(after(part, constant_inputs(3600, 930, 1.0, 10)));
  CHECK(crossed_mm(after(part, constant_inputs(3600, 930, 1.0, 60))) == doctest::Approx(fine).epsilon(1e-4));
  CHECK(crossed_mm(after(part, constant_inputs(3600, 930, 1.0, 1800))) ==
        doctest::Approx(fine).epsilon(1e-3));
}

TEST_CASE("a film's clock runs only as austenite in gas") {
  CarburizingPart part = part_of("8620");
  part.film_s = 600;
  const GasCarburizing model(part, MeshDensity{});
  GasCarburizing::Workspace workspace(model);
  GasCarburizing::State state = model.start(20);
  IntervalInputs cold = constant_inputs(60, 700, 0.8).front();
  model.advance(state, cold, workspace);
  CHECK(state.film_age_s == 0);
  IntervalInputs outside = constant_inputs(60, 930, 0.8).front();
  outside.gas = false;
  model.advance(state, outside, workspace);
  CHECK(state.film_age_s == 0);
  model.advance(state, constant_inputs(60, 930, 0.8).front(), workspace);
  CHECK(state.film_age_s == 60);
  model.advance(state, cold, workspace);
  CHECK(state.film_age_s == 60);
}

TEST_CASE("a film that has worn off stays off: neither a new gas nor a dip below austenite brings it back") {
  CarburizingPart part = part_of("8620");
  part.beta_m_per_s = 1e-7;
  part.film_s = 120;
  const GasCarburizing model(part, MeshDensity{});
  GasCarburizing::State state = model.start(930);
  const auto share_of_beta = [&] {
    return 1 / (state.conditions[0].surface.resistance_s_per_m * 1e-7 * model.alloy_factor());
  };
  run(model, state, constant_inputs(60, 930, 0.8));
  CHECK(share_of_beta() ==
        doctest::Approx(1 - 2 * (1 - std::exp(-0.5))).epsilon(1e-12));  // mean of the minute
  run(model, state, constant_inputs(3600, 930, 0.8));
  run(model, state, constant_inputs(60, 930, 1.1));
  CHECK(share_of_beta() > 1 - 1e-9);
  run(model, state, constant_inputs(600, 700, 1.1));
  run(model, state, constant_inputs(60, 930, 1.1));
  CHECK(share_of_beta() > 1 - 1e-9);
}

TEST_CASE("a member's own film: scale 0 is no film, same bits as a part without one") {
  CarburizingPart filmed = part_of("8620"), clean = filmed;
  filmed.film_s = 600;
  std::vector<Member> members(3);
  members[1].film_scale = 0;
  members[2].film_scale = 2;
  const GasCarburizing model(filmed, MeshDensity{}, members);
  GasCarburizing::State state = model.start(930);
  const auto inputs = constant_inputs(3600, 930, 1.0);
  run(model, state, inputs);
  const GasCarburizing::State bare = after(clean, inputs);
  for (std::size_t i = 0; i < model.mesh().nodes(); ++i)
    CHECK(state.field.carbon_wt_pct(1, i) == bare.field.carbon_wt_pct(0, i));
  CHECK(state.field.crossed_wt_pct_m[2] < state.field.crossed_wt_pct_m[0]);
}

TEST_CASE("measured gas: beta follows pCO pH2^0.5, of the law and of a beta set for the nominal gas") {
  for (bool set : {false, true}) {
    CarburizingPart nominal = part_of("8620");
    nominal.co_fraction = 0.20;
    nominal.h2_fraction = 0.40;
    if (set) nominal.beta_m_per_s = 1.4e-7;
    auto inputs = constant_inputs(3600, 930, 1.0);
    const double as_nominal = crossed_mm(after(nominal, inputs));
    for (IntervalInputs& in : inputs) {
      in.co_fraction = 0.17;
      in.h2_fraction = 0.45;
    }
    const double measured = crossed_mm(after(nominal, inputs));
    CarburizingPart same = nominal;
    if (set)
      same.beta_m_per_s = 1.4e-7 * (0.17 * std::sqrt(0.45)) / (0.20 * std::sqrt(0.40));
    else {
      same.co_fraction = 0.17;
      same.h2_fraction = 0.45;
    }
    CHECK(measured ==
          doctest::Approx(crossed_mm(after(same, constant_inputs(3600, 930, 1.0)))).epsilon(1e-12));
    CHECK(measured < as_nominal);
    for (IntervalInputs& in : inputs) {
      in.co_fraction = 0.20;
      in.h2_fraction = 0.40;
    }
    CHECK(crossed_mm(after(nominal, inputs)) == doctest::Approx(as_nominal).epsilon(1e-12));
    for (IntervalInputs& in : inputs) in.h2_fraction.reset();  // one alone is enough
    CHECK(crossed_mm(after(nominal, inputs)) == doctest::Approx(as_nominal).epsilon(1e-12));
    for (IntervalInputs& in : inputs) in.co_fraction = 0;
    CHECK(crossed_mm(after(nominal, inputs)) == 0);
  }
}

TEST_CASE(
    "measured gas that is no mole fraction fails the state, as any bad input; without gas it is not looked "
    "at") {
  const GasCarburizing model({}, MeshDensity{});
  GasCarburizing::Workspace workspace(model);
  for (double bad : {-0.01, 1.01, 20.0, std::nan("")}) {
    IntervalInputs in = constant_inputs(60, 930, 1.0).front();
    in.co_fraction = bad;
    GasCarburizing::State state = model.start(930);
    CHECK(model.advance(state, in, workspace).kind == OutcomeKind::failed);
    in.gas = false;
    in.carbon_potential_wt_pct = std::nan("");
    state = model.start(930);
    CHECK(model.advance(state, in, workspace).kind == OutcomeKind::reached);
  }
}

TEST_CASE(
    "outside gas nothing crosses the surface and carbon spreads: the surface falls, the depth grows "
    "(identity)") {
  for (const char* steel : {"8620", "18CrNiMo7-6"}) {
    const CarburizingPart part = part_of(steel);
    const GasCarburizing model(part, MeshDensity{});
    GasCarburizing::State state = model.start(930);
    run(model, state, constant_inputs(2 * 3600, 930, 1.0));
    const GasCarburizing::State boosted = state;
    const Outcome outcome = run(model, state, without_gas(constant_inputs(2 * 3600, 930, 1.0)));
    CHECK(outcome.kind == OutcomeKind::reached);
    CHECK(state.field.crossed_wt_pct_m[0] == boosted.field.crossed_wt_pct_m[0]);
    CHECK(surface_state(state.field, 0, state.conditions[0]).flux_wt_pct_m_per_s == 0.0);
    CHECK(residual(state) < 1e-12);
    CHECK(state.field.values[0] < boosted.field.values[0] - 0.1);
    CHECK(*depth_at_carbon_m(profile_of(state), 0.35) > *depth_at_carbon_m(profile_of(boosted), 0.35));
    // No notes of a gas that is not there, whatever the logger says of it.
    CHECK(run(model, state, without_gas(constant_inputs(600, 930, 2.0))).notes == 0);
  }
}

TEST_CASE("outside gas is a gas that gives and takes nothing: the limit of a vanishing beta (identity)") {
  const CarburizingPart part = part_of("8620");
  auto off = constant_inputs(3600, 930, 1.0), weak = off;
  append(off, without_gas(constant_inputs(3600, 930, 1.0)));
  auto tail = constant_inputs(3600, 930, 1.0);
  for (IntervalInputs& in : tail) in.co_fraction = 1e-12;
  append(weak, tail);
  const auto a = after(part, off), b = after(part, weak);
  for (std::size_t i = 0; i < a.field.values.size(); ++i)
    CHECK(std::fabs(a.field.values[i] - b.field.values[i]) < 2e-5);  // steps differ after gas off
}
