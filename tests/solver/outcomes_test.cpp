// The closed list of outcomes, one case each, and what the state is left at.
#include <doctest/doctest.h>

#include <cmath>
#include <limits>

#include "support/cycles.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

IntervalInputs inputs_at(double temperature_degc, double carbon_potential) {
  return constant_inputs(60, temperature_degc, carbon_potential).front();
}

Outcome one_minute(const CarburizingPart& part, const IntervalInputs& in) {
  const GasCarburizing model(part, MeshDensity{});
  GasCarburizing::Workspace workspace(model);
  GasCarburizing::State state = model.start(930);
  return model.advance(state, in, workspace);
}

}  // namespace

TEST_CASE("outcome: reached, without notes, in the middle of every range") {
  const Outcome outcome = one_minute({}, inputs_at(930, 1.0));
  CHECK(outcome.kind == OutcomeKind::reached);
  CHECK(outcome.notes == 0);
}

TEST_CASE("outcome: paused below the austenite range of the core; carbon stands still") {
  const GasCarburizing model({}, MeshDensity{});
  GasCarburizing::Workspace workspace(model);
  GasCarburizing::State state = model.start(930);
  run(model, state, constant_inputs(1800, 930, 1.0));
  const GasCarburizing::State before = state;
  const Outcome outcome = model.advance(state, inputs_at(700, 1.0), workspace);
  CHECK(outcome.kind == OutcomeKind::reached_with_note);
  CHECK(outcome.notes == note_paused_below_austenite);
  CHECK(state.field.values == before.field.values);
  CHECK(surface_state(state.field, 0, state.conditions[0]).flux_wt_pct_m_per_s == 0.0);
  // Andrews 1965, 0.2 wt% C plain: 910 - 203 sqrt(0.2) = 819.2 degC.
  CHECK(one_minute({}, inputs_at(819.0, 0.7)).notes == note_paused_below_austenite);
  CHECK(one_minute({}, inputs_at(819.5, 0.7)).notes == 0);
}

TEST_CASE("outcome: capped at the carbide limit of the steel, with and without soot in the gas") {
  CarburizingPart part;
  part.steel = case_steel("20MnCr5").composition;
  // 930 degC: graphite above Cp 1.268; cementite at 1.317 in the steel, that is at Cp 1.178 with k 0.8943.
  CHECK(one_minute(part, inputs_at(930, 1.17)).notes == 0);
  const Outcome capped = one_minute(part, inputs_at(930, 1.20));
  CHECK(capped.kind == OutcomeKind::reached_with_note);
  CHECK(capped.notes == note_capped_at_carbide_limit);
  CHECK(one_minute(part, inputs_at(930, 1.30)).notes == (note_capped_at_carbide_limit | note_sooting_gas));
  CHECK(one_minute({}, inputs_at(930, 1.26)).notes == 0);
  CHECK(one_minute({}, inputs_at(930, 1.28)).notes == note_sooting_gas);

  const GasCarburizing model(part, MeshDensity{});
  GasCarburizing::State state = model.start(930);
  run(model, state, constant_inputs(8 * 3600, 930, 2.5));
  CHECK(surface_state(state.field, 0, state.conditions[0]).carbon_wt_pct < 1.3177);
}

TEST_CASE("outcome: outside the range of the diffusivity law is computed and said") {
  CarburizingPart part;
  part.law = DiffusivityLaw::tibbetts;  // 800-1050 degC
  const Outcome outcome = one_minute(part, inputs_at(1060, 1.0));
  CHECK(outcome.kind == OutcomeKind::outside_range);
  CHECK(outcome.notes == note_outside_diffusivity_range);
  CHECK(one_minute({}, inputs_at(1060, 1.0)).kind == OutcomeKind::reached);  // within Agren's
}

TEST_CASE("outcome: failed on input that is no number; the state stays at the farthest good point") {
  const GasCarburizing model({}, MeshDensity{});
  GasCarburizing::State good = model.start(930);
  run(model, good, constant_inputs(1800, 930, 1.0));

  const double nan = std::numeric_limits<double>::quiet_NaN();
  const double infinite = std::numeric_limits<double>::infinity();
  std::vector<IntervalInputs> bad(7, inputs_at(930, 1.0));
  bad[0].carbon_potential_wt_pct = nan;
  bad[1].carbon_potential_wt_pct = infinite;
  bad[2].load_temperature_degc = nan;
  bad[3].furnace_temperature_degc = nan;
  bad[4].duration_s = nan;
  bad[5].duration_s = 0;
  bad[6].duration_s = -60;
  for (const IntervalInputs& in : bad) {
    GasCarburizing::Workspace workspace(model);
    GasCarburizing::State state = good;
    CHECK(model.advance(state, in, workspace).kind == OutcomeKind::failed);
    CHECK(state.failed);
    CHECK(state.field.values == good.field.values);
    CHECK(state.field.crossed_wt_pct_m == good.field.crossed_wt_pct_m);
    CHECK(state.part_temperature_degc == good.part_temperature_degc);
    // And it stays failed: later good input does not hide it.
    CHECK(model.advance(state, inputs_at(930, 1.0), workspace).kind == OutcomeKind::failed);
    CHECK(state.field.values == good.field.values);
  }
}

TEST_CASE("outcome: failed when a member's own numbers break, for the whole batch") {
  std::vector<Member> members(3);
  members[2].beta_scale = std::numeric_limits<double>::quiet_NaN();
  const GasCarburizing model({}, MeshDensity{}, members);
  GasCarburizing::Workspace workspace(model);
  GasCarburizing::State state = model.start(930);
  const GasCarburizing::State before = state;
  CHECK(model.advance(state, inputs_at(930, 1.0), workspace).kind == OutcomeKind::failed);
  CHECK(state.field.values == before.field.values);
  CHECK(std::isfinite(surface_state(state.field, 2, state.conditions[2]).carbon_wt_pct));
}
