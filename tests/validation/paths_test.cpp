// Identities on every steel of the library, every shape and several process paths: conservation, the maximum
// principle, monotone profiles, and that a state taken up again goes on as if it had never been put down
// (textbook). Tolerances are the ones solver/README.md states.
#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>

#include "support/paths.h"
#include "support/same_cycle.h"
#include "support/shapes.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

constexpr double overshoot_wt_pct = 2e-6;

GasCarburizing model_for(const Steel& steel, const Section& section, const ProcessPath& path) {
  CarburizingPart part;
  part.section = section;
  part.steel = steel.composition;
  part.core_carbon_wt_pct = steel.composition.c_wt_pct;
  part.film_s = path.film_s;
  MeshDensity density;
  density.diffusion_length_m = diffusion_length_m(path.inputs);
  return GasCarburizing(part, density);
}

struct Bounds {
  double lowest, highest;
  void widen(const GasCarburizing& model, const IntervalInputs& in) {
    if (!in.gas) return;
    lowest = std::min(lowest, in.carbon_potential_wt_pct / model.alloy_factor());
    highest = std::max(highest, in.carbon_potential_wt_pct / model.alloy_factor());
  }
};

struct Worst {
  double residual = 0, beyond = 0;
};

// One load from `state` on.
void pass(const GasCarburizing& model, GasCarburizing::State& state,
          const std::vector<IntervalInputs>& inputs, Bounds& bounds, Worst& worst) {
  GasCarburizing::Workspace workspace(model);
  for (const IntervalInputs& in : inputs) {
    const double crossed = state.field.crossed_wt_pct_m[0];
    const Outcome outcome = model.advance(state, in, workspace);
    bounds.widen(model, in);
    const auto [least, most] = std::minmax_element(state.field.values.begin(), state.field.values.end());
    worst.beyond = std::max({worst.beyond, bounds.lowest - *least, *most - bounds.highest});
    worst.residual =
        std::max(worst.residual, std::fabs(balance_residual(state.field, 0, state.initial_wt_pct_m[0])));
    if (!in.gas || (outcome.notes & note_paused_below_austenite))
      CHECK(state.field.crossed_wt_pct_m[0] == crossed);
  }
  CHECK_FALSE(state.failed);
}

bool same(const GasCarburizing::State& a, const GasCarburizing::State& b) {
  return a.field.values == b.field.values && a.field.crossed_wt_pct_m == b.field.crossed_wt_pct_m &&
         a.part_temperature_degc == b.part_temperature_degc && a.film_age_s == b.film_age_s;
}

}  // namespace

TEST_CASE("every steel, shape and path: carbon is conserved and stays within its bounds") {
  std::uint32_t seed = 500;
  for (const Steel& steel : case_steels())
    for (const Section& section : all_shapes(7e-3, 6e-3))
      for (const ProcessPath& path : process_paths(seed++)) {
        CAPTURE(steel.name);
        CAPTURE(static_cast<int>(section.shape));
        CAPTURE(path.name);
        const GasCarburizing model = model_for(steel, section, path);
        GasCarburizing::State state = model.start(850);
        Bounds bounds{steel.composition.c_wt_pct, steel.composition.c_wt_pct};
        Worst worst;
        pass(model, state, path.inputs, bounds, worst);
        if (!path.rework.empty()) {
          const double before = state.field.inventory_wt_pct_m(0);
          state = model.start(850, read_profile(state.field, 0, state.conditions[0]));
          CHECK(state.field.inventory_wt_pct_m(0) == before);
          pass(model, state, path.rework, bounds, worst);
        }
        CHECK(worst.residual < 1e-12);
        CHECK(worst.beyond < overshoot_wt_pct);
      }
}

TEST_CASE("every steel and path: a state taken up again goes on bit for bit, wherever it was put down") {
  std::uint32_t seed = 700;
  for (const Steel& steel : case_steels())
    for (const ProcessPath& path : process_paths(seed++)) {
      CAPTURE(steel.name);
      CAPTURE(path.name);
      const GasCarburizing model = model_for(steel, {Shape::cylinder, 7e-3, 0}, path);
      GasCarburizing::State straight = model.start(850);
      run(model, straight, path.inputs);
      // Within the film, the first minute out of gas, in a dip, and right after it.
      for (std::ptrdiff_t cut : {1, 61, 151, 180, 211}) {
        GasCarburizing::State state = model.start(850);
        run(model, state, {path.inputs.begin(), path.inputs.begin() + cut});
        GasCarburizing::State resumed = state;
        run(model, state, path.inputs);  // leads away from the mark
        run(model, resumed, {path.inputs.begin() + cut, path.inputs.end()});
        CHECK(same(straight, resumed));
        CHECK_FALSE(same(straight, state));
      }
    }
}

TEST_CASE(
    "boost at constant gas, also with a film or out of gas in between: carbon falls with depth all the "
    "time") {
  for (const Steel& steel : case_steels())
    for (const Section& section : all_shapes(7e-3, 6e-3))
      for (const bool interrupted : {false, true}) {
        CAPTURE(steel.name);
        CAPTURE(static_cast<int>(section.shape));
        CAPTURE(interrupted);
        ProcessPath path{"boost", 900, constant_inputs(5 * 3600, 930, 1.05), {}};
        if (interrupted)
          for (std::size_t i = 120; i < 180; ++i) path.inputs[i].gas = false;
        const GasCarburizing model = model_for(steel, section, path);
        GasCarburizing::Workspace workspace(model);
        GasCarburizing::State state = model.start(930);
        double rise_inward = 0, fall_in_time = 0;
        std::vector<double> before = state.field.values;
        for (const IntervalInputs& in : path.inputs) {
          model.advance(state, in, workspace);
          const auto& c = state.field.values;
          for (std::size_t i = 1; i < c.size(); ++i) rise_inward = std::max(rise_inward, c[i] - c[i - 1]);
          if (in.gas)
            for (std::size_t i = 0; i < c.size(); ++i)
              fall_in_time = std::max(fall_in_time, before[i] - c[i]);
          before = c;
        }
        CHECK(rise_inward < overshoot_wt_pct);
        if (!interrupted) CHECK(fall_in_time < overshoot_wt_pct);
      }
}

TEST_CASE("every steel and path: richer gas gives more carbon everywhere (comparison principle)") {
  std::uint32_t seed = 800;
  for (const Steel& steel : case_steels())
    for (const ProcessPath& path : process_paths(seed++)) {
      CAPTURE(steel.name);
      CAPTURE(path.name);
      const GasCarburizing model = model_for(steel, {Shape::bore, 7e-3, 6e-3}, path);
      GasCarburizing::State lean = model.start(850), rich = lean;
      auto more = path.inputs;
      for (IntervalInputs& in : more) in.carbon_potential_wt_pct += 0.02;
      run(model, lean, path.inputs);
      run(model, rich, more);
      double least = 1;
      for (std::size_t i = 0; i < lean.field.values.size(); ++i)
        least = std::min(least, rich.field.values[i] - lean.field.values[i]);
      CHECK(least > -overshoot_wt_pct);
      CHECK(rich.field.crossed_wt_pct_m[0] > lean.field.crossed_wt_pct_m[0]);
    }
}
