// Identities that hold on every steel and shape, whatever the data (conservation and the maximum principle;
// textbook). Tolerances are the ones solver/README.md states.
#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>

#include "support/same_cycle.h"
#include "support/shapes.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

// The scheme is of high order and so not free of over- and undershoot; stated bound.
constexpr double overshoot_wt_pct = 2e-6;

GasCarburizing model_for(const Steel& steel, const Section& section,
                         const std::vector<IntervalInputs>& inputs) {
  CarburizingPart part;
  part.section = section;
  part.steel = steel.composition;
  part.core_carbon_wt_pct = steel.composition.c_wt_pct;
  MeshDensity density;
  density.diffusion_length_m = diffusion_length_m(inputs);
  return GasCarburizing(part, density);
}

}  // namespace

TEST_CASE("eight steels, four shapes, noisy minutes: carbon is conserved and stays within its bounds") {
  std::uint32_t seed = 100;
  for (const Steel& steel : case_steels())
    for (double extent_m : {1.2e-3, 9e-3})
      for (const Section& section : all_shapes(extent_m, 5e-3)) {
        CAPTURE(steel.name);
        CAPTURE(static_cast<int>(section.shape));
        const auto inputs = noisy_eight_hours(seed++);
        const GasCarburizing model = model_for(steel, section, inputs);
        GasCarburizing::Workspace workspace(model);
        GasCarburizing::State state = model.start(850);
        const double core = steel.composition.c_wt_pct;
        double lowest = core, highest = core;
        double residual = 0, below = 0, above = 0;
        for (const IntervalInputs& in : inputs) {
          model.advance(state, in, workspace);
          lowest = std::min(lowest, in.carbon_potential_wt_pct / model.alloy_factor());
          highest = std::max(highest, in.carbon_potential_wt_pct / model.alloy_factor());
          residual =
              std::max(residual, std::fabs(balance_residual(state.field, 0, state.initial_wt_pct_m[0])));
          const auto [least, most] =
              std::minmax_element(state.field.values.begin(), state.field.values.end());
          below = std::max(below, lowest - *least);
          above = std::max(above, *most - highest);
        }
        CHECK_FALSE(state.failed);
        CHECK(residual < 1e-12);
        CHECK(below < overshoot_wt_pct);
        CHECK(above < overshoot_wt_pct);
      }
}

TEST_CASE("boost at constant gas: carbon falls with depth and rises with time, everywhere") {
  for (const Steel& steel : {case_steel("18CrNiMo7-6"), case_steel("8620")})
    for (const Section& section : all_shapes(9e-3, 5e-3)) {
      CAPTURE(steel.name);
      CAPTURE(static_cast<int>(section.shape));
      const auto inputs = constant_inputs(6 * 3600, 930, 1.05);
      const GasCarburizing model = model_for(steel, section, inputs);
      GasCarburizing::Workspace workspace(model);
      GasCarburizing::State state = model.start(930);
      double rise_inward = 0, fall_in_time = 0;
      std::vector<double> before = state.field.values;
      for (const IntervalInputs& in : inputs) {
        model.advance(state, in, workspace);
        const auto& c = state.field.values;
        for (std::size_t i = 0; i < c.size(); ++i) {
          if (i > 0) rise_inward = std::max(rise_inward, c[i] - c[i - 1]);
          fall_in_time = std::max(fall_in_time, before[i] - c[i]);
        }
        before = c;
      }
      CHECK(rise_inward < overshoot_wt_pct);
      CHECK(fall_in_time < overshoot_wt_pct);
    }
}

TEST_CASE("intervals cut to a hundredth of a second right after a jump: a small, passing undershoot") {
  const auto lowest = [](double beta_m_per_s) {
    CarburizingPart part;
    part.beta_m_per_s = beta_m_per_s;
    const GasCarburizing model(part, MeshDensity{});
    GasCarburizing::Workspace workspace(model);
    GasCarburizing::State state = model.start(930);
    IntervalInputs in = constant_inputs(60, 930, 1.0).front();
    in.duration_s = 0.01;
    double least = 1;
    for (int i = 0; i < 20; ++i) {
      model.advance(state, in, workspace);
      least = std::min(least, *std::min_element(state.field.values.begin(), state.field.values.end()));
    }
    run(model, state, constant_inputs(600, 930, 1.0));
    CHECK(*std::min_element(state.field.values.begin(), state.field.values.end()) > 0.2 - overshoot_wt_pct);
    return least;
  };
  CHECK(lowest(1.3e-7) > 0.2 - 2e-4);
  CHECK(lowest(1e3) > 0.2 - 0.05);  // a fixed surface
}

TEST_CASE("a section in balance with its gas stays exactly as it is") {
  CarburizingPart part;
  part.core_carbon_wt_pct = 0.25;
  const GasCarburizing model(part, MeshDensity{});
  GasCarburizing::State state = model.start(900);
  const auto before = state.field.values;
  run(model, state, constant_inputs(3600, 900, 0.25));
  CHECK(state.field.values == before);
  CHECK(state.field.crossed_wt_pct_m[0] == 0.0);
}

TEST_CASE("a curved section: a cylinder of large radius is a plate, a small one fills faster than it") {
  const auto inputs = constant_inputs(4 * 3600, 930, 1.0);
  const auto depth_mm = [&](const Section& section) {
    const GasCarburizing model = model_for(case_steel("8620"), section, inputs);
    GasCarburizing::State state = model.start(930);
    run(model, state, inputs);
    return 1e3 * depth_at_carbon_m(read_profile(state.field, 0, state.conditions[0]), 0.35).value();
  };
  const double plate = depth_mm({Shape::plate, 10e-3, 0});
  CHECK(depth_mm({Shape::cylinder, 0.5, 0}) == doctest::Approx(plate).epsilon(2e-3));
  CHECK(depth_mm({Shape::bore, 10e-3, 0.5}) == doctest::Approx(plate).epsilon(2e-3));
  CHECK(depth_mm({Shape::sphere, 5e-3, 0}) > depth_mm({Shape::cylinder, 5e-3, 0}));
  CHECK(depth_mm({Shape::cylinder, 5e-3, 0}) > plate);
  CHECK(depth_mm({Shape::bore, 10e-3, 5e-3}) < plate);
}
