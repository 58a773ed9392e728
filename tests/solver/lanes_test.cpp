// Invariants of grouping and of time (common practice, no source): what a member computes does not depend on
// who computes beside it, and a copied state goes on exactly as the original. All comparisons are of bits.
#include <doctest/doctest.h>

#include <cmath>

#include "support/cycles.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

std::vector<Member> members(std::size_t count) {
  std::vector<Member> result(count);
  for (std::size_t i = 1; i < count; ++i) {
    const double x = static_cast<double>(i);
    result[i] = {1 + 0.011 * x, 1 - 0.017 * x, 1 + 0.03 * x, 0.4 * x - 3, 0.004 * x - 0.03, 0.0007 * x};
  }
  return result;
}

GasCarburizing model_of(std::vector<Member> lanes) {
  CarburizingPart part;
  part.section = {Shape::cylinder, 8e-3, 0};
  part.steel = case_steel("20MnCr5").composition;
  part.core_carbon_wt_pct = 0.195;
  return GasCarburizing(part, MeshDensity{}, std::move(lanes));
}

GasCarburizing::State after(const GasCarburizing& model, const std::vector<IntervalInputs>& inputs) {
  GasCarburizing::State state = model.start(850);
  REQUIRE(run(model, state, inputs).kind != OutcomeKind::failed);
  return state;
}

bool same_lane(const CarbonField& a, std::size_t lane_a, const CarbonField& b, std::size_t lane_b) {
  for (std::size_t i = 0; i < a.mesh->nodes(); ++i)
    if (a.carbon_wt_pct(lane_a, i) != b.carbon_wt_pct(lane_b, i)) return false;
  return a.crossed_wt_pct_m[lane_a] == b.crossed_wt_pct_m[lane_b];
}

std::vector<IntervalInputs> two_hours() {
  std::vector<IntervalInputs> inputs = noisy_eight_hours(7);
  inputs.erase(inputs.begin() + 60, inputs.begin() + 420);  // keeps the ramp, a jump of Cp and the cooling
  return inputs;
}

}  // namespace

TEST_CASE("a member's bits are the same in a batch of any size from 1 to 17") {
  const auto inputs = two_hours();
  constexpr std::size_t most = 17;
  const GasCarburizing::State all = after(model_of(members(most)), inputs);
  for (std::size_t count = 1; count < most; ++count) {
    CAPTURE(count);
    const GasCarburizing::State some = after(model_of(members(count)), inputs);
    for (std::size_t lane = 0; lane < count; ++lane) CHECK(same_lane(all.field, lane, some.field, lane));
  }
}

TEST_CASE("a member's bits are the same alone as in a batch") {
  const auto inputs = two_hours();
  const auto lanes = members(17);
  const GasCarburizing::State all = after(model_of(lanes), inputs);
  for (std::size_t lane = 0; lane < lanes.size(); ++lane) {
    CAPTURE(lane);
    CHECK(same_lane(all.field, lane, after(model_of({lanes[lane]}), inputs).field, 0));
  }
  // And the members are not all alike.
  CHECK_FALSE(same_lane(all.field, 1, all.field, 2));
}

TEST_CASE("a copied state continues as the original, whatever the workspace has seen") {
  const GasCarburizing model = model_of(members(5));
  const auto inputs = two_hours();
  const GasCarburizing::State straight = after(model, inputs);
  for (std::size_t cut : {1u, 43u, 61u, 100u}) {
    GasCarburizing::Workspace used(model), fresh(model);
    GasCarburizing::State state = model.start(850);
    for (std::size_t i = 0; i < cut; ++i) model.advance(state, inputs[i], used);
    const GasCarburizing::State mark = state;
    for (int i = 0; i < 5; ++i) model.advance(state, inputs[0], used);  // leads away from the mark
    GasCarburizing::State resumed = mark;
    for (std::size_t i = cut; i < inputs.size(); ++i) model.advance(resumed, inputs[i], fresh);
    CAPTURE(cut);
    for (std::size_t lane = 0; lane < 5; ++lane) CHECK(same_lane(straight.field, lane, resumed.field, lane));
    CHECK(straight.part_temperature_degc == resumed.part_temperature_degc);
  }
}

TEST_CASE("a part lags the furnace exactly, however the time is cut (lumped body, textbook)") {
  CarburizingPart part;
  part.lag_s = 1200;
  const GasCarburizing model(part, MeshDensity{});
  for (double interval_s : {60.0, 300.0, 1800.0}) {
    GasCarburizing::Workspace workspace(model);
    GasCarburizing::State state = model.start(20);
    IntervalInputs in;
    in.duration_s = interval_s;
    in.furnace_temperature_degc = 930;
    for (double t = 0; t < 1800 - 1; t += interval_s) model.advance(state, in, workspace);
    CHECK(state.part_temperature_degc[0] == doctest::Approx(930 - 910 * std::exp(-1.5)).epsilon(1e-12));
  }
}
