// A second load that begins from the profile an earlier one left.
#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>
#include <initializer_list>
#include <stdexcept>

#include "support/cycles.h"
#include "support/shapes.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

CarburizingPart part_of(const char* steel, const Section& section = {}) {
  CarburizingPart part;
  part.section = section;
  part.steel = case_steel(steel).composition;
  part.core_carbon_wt_pct = part.steel.c_wt_pct;
  return part;
}

Profile profile_of(const GasCarburizing::State& state) {
  return read_profile(state.field, 0, state.conditions[0]);
}

double depth_of(const GasCarburizing::State& state) {
  return *depth_at_carbon_m(profile_of(state), 0.35);
}

double crossed_mm(const GasCarburizing::State& state) {
  return 1e3 * state.field.crossed_wt_pct_m[0];
}

double residual(const GasCarburizing::State& state) {
  return std::fabs(balance_residual(state.field, 0, state.initial_wt_pct_m[0]));
}

}  // namespace

TEST_CASE("rework: a load begun from the first half's profile ends as one long load") {
  for (const Section& section : all_shapes(6e-3, 5e-3)) {
    CAPTURE(static_cast<int>(section.shape));
    const CarburizingPart part = part_of("20MnCr5", section);
    const GasCarburizing model(part, MeshDensity{});
    auto first = noisy_eight_hours(41);
    const std::vector<IntervalInputs> second(first.begin() + 200, first.end());
    first.resize(200);
    GasCarburizing::State whole = model.start(930);
    run(model, whole, first);
    const GasCarburizing::State half = whole;
    run(model, whole, second);
    GasCarburizing::State rework = model.start(930, profile_of(half));
    CHECK(rework.field.values == half.field.values);  // same nodes: bit for bit
    CHECK(rework.initial_wt_pct_m[0] == half.field.inventory_wt_pct_m(0));
    run(model, rework, second);
    double worst = 0;
    for (std::size_t i = 0; i < whole.field.values.size(); ++i)
      worst = std::max(worst, std::fabs(whole.field.values[i] - rework.field.values[i]));
    CHECK(worst < 1e-6);  // the steps after the charge are short and damped; the long load has none there
    CHECK(std::fabs(depth_of(whole) - depth_of(rework)) < 1e-8);
    CHECK(residual(rework) < 1e-12);
    CHECK(crossed_mm(whole) == doctest::Approx(crossed_mm(half) + crossed_mm(rework)).epsilon(1e-5));
  }
}

TEST_CASE("rework: onto another mesh, the carbon inside within 3e-4 of the case, depths within 0.3 um") {
  for (const Section& section : all_shapes(6e-3, 5e-3))
    for (double length_m : {0.6e-3, 1.6e-3, 2.5e-3}) {
      CAPTURE(static_cast<int>(section.shape));
      CAPTURE(length_m);
      const CarburizingPart part = part_of("20MnCr5", section);
      MeshDensity density;
      density.diffusion_length_m = 1.2e-3;
      const GasCarburizing earlier(part, density);
      GasCarburizing::State state = earlier.start(930);
      run(earlier, state, noisy_eight_hours(42));
      const Profile profile = profile_of(state);
      density.diffusion_length_m = length_m;
      const GasCarburizing later(part, density);
      const GasCarburizing::State rework = later.start(850, profile);
      const double above_core = state.field.inventory_wt_pct_m(0) - state.initial_wt_pct_m[0];
      CHECK(std::fabs(rework.field.inventory_wt_pct_m(0) - state.field.inventory_wt_pct_m(0)) <
            3e-4 * above_core);
      CHECK(std::fabs(depth_of(rework) - depth_of(state)) < 0.3e-6);
      CHECK(rework.field.values[0] == state.field.values[0]);
      CHECK(rework.part_temperature_degc[0] == 850);
    }
}

TEST_CASE("rework: members keep their own core; a film is there anew") {
  CarburizingPart part = part_of("8620");
  part.film_s = 300;
  std::vector<Member> members(2);
  members[1].core_carbon_offset_wt_pct = 0.02;
  const GasCarburizing model(part, MeshDensity{}, members);
  GasCarburizing::State state = model.start(930);
  run(model, state, constant_inputs(3600, 930, 1.0));
  const GasCarburizing::State rework = model.start(930, profile_of(state));
  CHECK(rework.film_age_s == 0);
  for (std::size_t i = 0; i < model.mesh().nodes(); ++i)
    CHECK(rework.field.carbon_wt_pct(1, i) == doctest::Approx(rework.field.carbon_wt_pct(0, i) + 0.02));
}

TEST_CASE("rework: a profile that cannot be of this section is refused") {
  const GasCarburizing model({}, MeshDensity{});
  const Profile good = profile_of(model.start(930));
  CHECK_NOTHROW(model.start(930, good));
  const auto refused = [&](auto change) {
    Profile profile = good;
    change(profile);
    CHECK_THROWS_AS(model.start(930, profile), std::invalid_argument);
  };
  refused([](Profile& p) {
    for (double& x : p.depth_m) x *= 1.1;
  });
  refused([](Profile& p) {
    for (double& x : p.depth_m) x *= 0.9;
  });
  refused([](Profile& p) { std::swap(p.depth_m[3], p.depth_m[4]); });
  refused([](Profile& p) { p.depth_m[0] = 1e-6; });
  refused([](Profile& p) { p.depth_m.pop_back(); });
  refused([](Profile& p) { p.carbon_wt_pct[7] = std::nan(""); });
  refused([](Profile& p) { p.carbon_wt_pct[7] = -0.1; });
  refused([](Profile& p) { p = {{0, 1e-3, 1e-2}, {1, 0.5, 0.2}}; });
}
