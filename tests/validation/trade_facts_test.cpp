// What every carburizer and every textbook of diffusion knows, checked on the solver as shipped. "Common
// practice, no source" unless one is named.
#include <doctest/doctest.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <initializer_list>
#include <string>

#include "support/shapes.h"
#include "validation/exact_support.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

constexpr Section plate{Shape::plate, 10e-3, 0};

Profile profile_of(const GasCarburizing::State& state) {
  return read_profile(state.field, 0, state.conditions[0]);
}

// Second derivative from three uneven nodes.
double curvature(const std::vector<double>& x, const std::vector<double>& c, std::size_t i) {
  const double left = x[i] - x[i - 1], right = x[i + 1] - x[i];
  return 2 * ((c[i + 1] - c[i]) / right - (c[i] - c[i - 1]) / left) / (left + right);
}

}  // namespace

// A thin film spreads to both sides as a Gaussian: common practice, no source, and exact (Crank 1975):
// half_space_test.cpp, "thin film between two half-spaces".

TEST_CASE(
    "where the profile is concave the steel loses carbon, where it is convex it gains (constant D, plate)") {
  const GasCarburizing model(constant_part(plate, 1.3e-7), density_for(1.2e-3));
  GasCarburizing::Workspace workspace(model);
  GasCarburizing::State state = model.start(930);
  run(model, state, constant_inputs(3 * 3600, 930, 1.10));
  const auto& x = model.mesh().depth_m;
  std::size_t losing = 0, gaining = 0, compared = 0;
  for (const IntervalInputs& in : constant_inputs(2 * 3600, 930, 0.70)) {
    const auto before = state.field.values;
    model.advance(state, in, workspace);
    if (state.settled_s < 600) continue;  // the jump's own boundary layer passes the first nodes
    for (std::size_t i = 1; i + 1 < x.size() && x[i] < 2.5e-3; ++i) {
      const double rate = (state.field.values[i] - before[i]) / in.duration_s;
      const double by_law =
          d_constant * 0.5 * (curvature(x, before, i) + curvature(x, state.field.values, i));
      // Near an inflection three nodes cannot tell the sign: that is where the law's rate is small.
      if (std::fabs(by_law) < 3e-7) continue;
      ++compared;
      CHECK(rate * by_law > 0);
      (rate < 0 ? losing : gaining) += 1;
    }
  }
  CHECK(losing > compared / 10);
  CHECK(gaining > compared / 10);
}

TEST_CASE("after boost the depth of turnover and every depth of carbon move inward with time") {
  // Out of gas for as long as it lasts. In a poorer gas only at first: as the surface comes to rest with the
  // gas, the metal that loses carbon gets less, and in the end all of it gains.
  for (const Section& section : all_shapes(8e-3, 6e-3))
    for (const char* name : {"20MnCr5", "8620"})
      for (const bool in_gas : {true, false}) {
        CAPTURE(static_cast<int>(section.shape));
        CAPTURE(std::string(name));
        CAPTURE(in_gas);
        CarburizingPart part;
        part.section = section;
        part.steel = case_steel(name).composition;
        part.core_carbon_wt_pct = part.steel.c_wt_pct;
        const GasCarburizing model(part, density_for(1.3e-3));
        GasCarburizing::Workspace workspace(model);
        GasCarburizing::State state = model.start(930);
        run(model, state, constant_inputs(3 * 3600, 930, 1.10));
        CHECK_FALSE(turnover_depth_m(state.field, 0, state.conditions[0]).has_value());
        double turnover = 0, total = 0, at_035 = 0;
        auto diffuse = constant_inputs(2 * 3600, 930, 0.75);
        for (IntervalInputs& in : diffuse) {
          in.gas = in_gas;
          model.advance(state, in, workspace);
          const Profile profile = profile_of(state);
          const double total_now = *depth_at_carbon_m(profile, part.core_carbon_wt_pct + 0.04);
          const double at_035_now = *depth_at_carbon_m(profile, 0.35);
          CHECK(total_now > total);
          CHECK(at_035_now > at_035);
          total = total_now;
          at_035 = at_035_now;
          if (state.settled_s < 120 || (in_gas && state.settled_s > 1800)) continue;
          const auto now = turnover_depth_m(state.field, 0, state.conditions[0]);
          REQUIRE(now.has_value());
          CHECK(*now > turnover);
          turnover = *now;
        }
        CHECK(turnover > 0.3e-3);
        CHECK(turnover < total);
      }
}

TEST_CASE(
    "a film on the surface makes every case shallower and its surface poorer, and the delay wears off") {
  for (const Section& section : all_shapes(8e-3, 6e-3)) {
    CAPTURE(static_cast<int>(section.shape));
    CarburizingPart part;
    part.section = section;
    part.steel = case_steel("16MnCr5").composition;
    part.core_carbon_wt_pct = part.steel.c_wt_pct;
    const auto end = [&](double film_s, double hours) {
      part.film_s = film_s;
      const GasCarburizing model(part, density_for(1.2e-3));
      GasCarburizing::State state = model.start(930);
      run(model, state, constant_inputs(hours * 3600, 930, 1.0));
      return profile_of(state);
    };
    const auto lost = [&](double hours) {
      const Profile clean = end(0, hours), filmed = end(900, hours);
      CHECK(filmed.carbon_wt_pct.front() < clean.carbon_wt_pct.front());
      const double clean_depth = *depth_at_carbon_m(clean, 0.35);
      const double share = 1 - *depth_at_carbon_m(filmed, 0.35) / clean_depth;
      CHECK(share > 0);
      return share;
    };
    CHECK(lost(4) < 0.5 * lost(1));
  }
}

TEST_CASE("a thin body follows its gas as exp(-beta t / l) (textbook, lumped for beta l / D << 1)") {
  // Half thickness 0.2 mm, beta l / D = 0.02. The rate of a slab at small Bi is beta / l / (1 + Bi / 3).
  const double beta = 2e-9, l = 0.2e-3, bi = beta * l / d_constant;
  const GasCarburizing model(constant_part({Shape::plate, l, 0}, beta), density_for(1e-3));
  GasCarburizing::Workspace workspace(model);
  GasCarburizing::State state = model.start(930);
  double t = 0;
  for (const IntervalInputs& in : constant_inputs(24 * 3600, 930, 1.0, 600)) {
    model.advance(state, in, workspace);
    t += in.duration_s;
    const double mean = state.field.inventory_wt_pct_m(0) / l;
    CHECK(std::fabs((1.0 - mean) / 0.8 - std::exp(-beta * t / l / (1 + bi / 3))) < 1e-4);
    CHECK(std::fabs((1.0 - mean) / 0.8 - std::exp(-beta * t / l)) < bi);
  }
}

TEST_CASE("a part behind its furnace: 20 -> 925 degC at 930 in 5.20 time constants (lumped body, textbook)") {
  // 25, 50, 100 mm bars at h = 200 W/m2/K, 7600 kg/m3, 650 J/kg/K (from memory): tau 154, 309, 618 s; 13, 27,
  // 54 min.
  for (const auto& [diameter_m, tau_s, minutes] :
       {std::array{0.025, 154.0, 13.0}, {0.050, 309.0, 27.0}, {0.100, 618.0, 54.0}}) {
    CHECK(std::fabs(7600 * 650 * (diameter_m / 4) / 200 - tau_s) < 0.6);
    CarburizingPart part;
    part.lag_s = tau_s;
    const GasCarburizing model(part, MeshDensity{});
    GasCarburizing::Workspace workspace(model);
    GasCarburizing::State state = model.start(20);
    IntervalInputs in;
    in.duration_s = 1;
    in.furnace_temperature_degc = 930;
    double t = 0;
    for (; state.part_temperature_degc[0] < 925; t += 1) model.advance(state, in, workspace);
    CHECK(std::fabs(t / tau_s - 5.20) < 0.015);
    CHECK(std::fabs(t / 60 - minutes) < 0.6);
  }
}
