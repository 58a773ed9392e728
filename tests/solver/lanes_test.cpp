// Invariants of grouping and of time (common practice, no source): what a member computes does not depend on
// who computes beside it, and a copied state goes on exactly as the original. All these comparisons are of
// bits and are made with each build of the step kernel; between the builds there is a tolerance.
#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <string>
#include <vector>

#include "solver/diffusion/kernel_choice.h"
#include "support/cycles.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

// Calls f with each kernel that this processor can run, and puts the choice back.
template <class F>
void with_each_kernel(F f) {
  const KernelKind before = kernel_choice();
  for (KernelKind kind : {KernelKind::baseline, KernelKind::avx2_fma}) {
    if (!use_kernel(kind)) continue;
    CAPTURE(kernel_name());
    f();
  }
  use_kernel(before);
}

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
  with_each_kernel([] {
    const auto inputs = two_hours();
    constexpr std::size_t most = 17;
    const GasCarburizing::State all = after(model_of(members(most)), inputs);
    for (std::size_t count = 1; count < most; ++count) {
      CAPTURE(count);
      const GasCarburizing::State some = after(model_of(members(count)), inputs);
      for (std::size_t lane = 0; lane < count; ++lane) CHECK(same_lane(all.field, lane, some.field, lane));
    }
  });
}

TEST_CASE("a member's bits are the same alone as in a batch") {
  with_each_kernel([] {
    const auto inputs = two_hours();
    const auto lanes = members(17);
    const GasCarburizing::State all = after(model_of(lanes), inputs);
    for (std::size_t lane = 0; lane < lanes.size(); ++lane) {
      CAPTURE(lane);
      CHECK(same_lane(all.field, lane, after(model_of({lanes[lane]}), inputs).field, 0));
    }
    // And the members are not all alike.
    CHECK_FALSE(same_lane(all.field, 1, all.field, 2));
  });
}

TEST_CASE("a copied state continues as the original, whatever the workspace has seen") {
  with_each_kernel([] {
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
      for (std::size_t lane = 0; lane < 5; ++lane)
        CHECK(same_lane(straight.field, lane, resumed.field, lane));
      CHECK(straight.part_temperature_degc == resumed.part_temperature_degc);
    }
  });
}

TEST_CASE("which members share a block does not matter") {
  // Their order is turned by one, three and eight places: other neighbours, other places in the block.
  with_each_kernel([] {
    const auto inputs = two_hours();
    auto lanes = members(19);
    const GasCarburizing::State straight = after(model_of(lanes), inputs);
    for (const std::size_t turn : {1u, 3u, 8u}) {
      CAPTURE(turn);
      // Lane 0 is the nominal one and stays: jumps are decided on it.
      auto turned = lanes;
      std::rotate(turned.begin() + 1, turned.begin() + 1 + static_cast<std::ptrdiff_t>(turn), turned.end());
      const GasCarburizing::State other = after(model_of(turned), inputs);
      for (std::size_t lane = 1; lane < lanes.size(); ++lane)
        CHECK(same_lane(straight.field, lane, other.field,
                        1 + (lane - 1 + lanes.size() - 1 - turn) % (lanes.size() - 1)));
    }
  });
}

TEST_CASE("an odd member out does not touch the others: one lane of NaN in a block") {
  with_each_kernel([] {
    const auto inputs = two_hours();
    const GasCarburizing model = model_of(members(8));
    GasCarburizing::State state = model.start(850), good = state;
    GasCarburizing::Workspace workspace(model);
    for (std::size_t i = 0; i < state.field.mesh->nodes(); ++i)
      state.field.set_carbon_wt_pct(5, i, std::nan(""));
    std::vector<LaneConditions> conditions(8);
    for (LaneConditions& c : conditions) {
      c.diffusivity = diffusivity_form(DiffusivityLaw::agren, 1203.15);
      c.surface = {1.0, 1 / 1.25e-7, 0};
    }
    DiffusionStepper stepper(state.field.mesh->nodes(), 8);
    for (const bool damped : {true, false}) {
      stepper.step(state.field, conditions, 10, damped);
      stepper.step(good.field, conditions, 10, damped);
    }
    for (std::size_t lane = 0; lane < 8; ++lane)
      if (lane != 5) CHECK(same_lane(state.field, lane, good.field, lane));
    CHECK(std::isnan(state.field.carbon_wt_pct(5, 3)));
    CHECK(std::isnan(state.field.crossed_wt_pct_m[5]));
  });
}

TEST_CASE("a kernel is named, and chosen by what the processor can") {
  CHECK(kernel_available(KernelKind::baseline));
  CHECK(kernel_choice() ==
        (kernel_available(KernelKind::avx2_fma) ? KernelKind::avx2_fma : KernelKind::baseline));
  CHECK(std::string(kernel_name(KernelKind::baseline)) == "baseline");
  CHECK(std::string(kernel_name(KernelKind::avx2_fma)) == "avx2+fma");
  if (!kernel_available(KernelKind::avx2_fma)) CHECK_FALSE(use_kernel(KernelKind::avx2_fma));
  with_each_kernel([] { CHECK(std::string(kernel_name()) == kernel_name(kernel_choice())); });
}

TEST_CASE("a workspace keeps the kernel it was made with" *
          doctest::skip(!kernel_available(KernelKind::avx2_fma))) {
  const auto inputs = two_hours();
  const GasCarburizing model = model_of(members(3));
  const KernelKind before = kernel_choice();
  use_kernel(KernelKind::baseline);
  const GasCarburizing::State expected = after(model, inputs);
  GasCarburizing::Workspace workspace(model);
  use_kernel(KernelKind::avx2_fma);
  GasCarburizing::State state = model.start(850);
  for (const IntervalInputs& in : inputs) model.advance(state, in, workspace);
  use_kernel(before);
  for (std::size_t lane = 0; lane < 3; ++lane) CHECK(same_lane(state.field, lane, expected.field, lane));
}

TEST_CASE("both kernels agree within 1e-9: profiles, depths, what crossed" *
          doctest::skip(!kernel_available(KernelKind::avx2_fma))) {
  constexpr double tolerance = 1e-9;
  const auto inputs = noisy_eight_hours(7);
  for (const std::size_t count : {1u, 11u}) {
    const GasCarburizing model = model_of(members(count));
    std::vector<GasCarburizing::State> states;
    with_each_kernel([&] { states.push_back(after(model, inputs)); });
    REQUIRE(states.size() == 2);
    const GasCarburizing::State &one = states[0], &other = states[1];
    bool all_the_same = true;
    for (std::size_t lane = 0; lane < count; ++lane) {
      CAPTURE(lane);
      all_the_same = all_the_same && same_lane(one.field, lane, other.field, lane);
      double worst = 0;
      for (std::size_t i = 0; i < model.mesh().nodes(); ++i)
        worst = std::max(
            worst, std::fabs(one.field.carbon_wt_pct(lane, i) / other.field.carbon_wt_pct(lane, i) - 1));
      CHECK(worst < tolerance);
      CHECK(std::fabs(one.field.crossed_wt_pct_m[lane] / other.field.crossed_wt_pct_m[lane] - 1) < tolerance);
      for (const double limit : {0.3, 0.35, 0.4, 0.5}) {
        const auto depth = [&](const GasCarburizing::State& s) {
          return depth_at_carbon_m(read_profile(s.field, lane, s.conditions[lane]), limit).value();
        };
        CHECK(std::fabs(depth(one) / depth(other) - 1) < tolerance);
      }
    }
    CHECK_FALSE(all_the_same);  // or one kernel was compared with itself
  }
}

TEST_CASE("a part lags the furnace exactly, however the time is cut (lumped body, textbook)") {
  CarburizingPart part;
  part.lag_s = 1200;
  const GasCarburizing model(part, MeshDensity{});
  for (const int intervals : {30, 6, 1}) {
    GasCarburizing::Workspace workspace(model);
    GasCarburizing::State state = model.start(20);
    IntervalInputs in;
    in.duration_s = 1800.0 / intervals;
    in.furnace_temperature_degc = 930;
    for (int i = 0; i < intervals; ++i) model.advance(state, in, workspace);
    CHECK(state.part_temperature_degc[0] == doctest::Approx(930 - 910 * std::exp(-1.5)).epsilon(1e-12));
  }
}
