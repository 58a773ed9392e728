// The projection along a plan: how a furnace follows its set points, what ends a segment, and that long steps
// do not cost accuracy.
#include <doctest/doctest.h>

#include <cmath>
#include <stdexcept>

#include "solver/outlook/outlook.h"
#include "support/cycles.h"

using namespace hearthfront::solver;

namespace {

constexpr double minute_s = 60;

struct Part {
  std::vector<ItemDraws> draws = draw_members({}, {{true}}, 42);
  GasCarburizing model;
  GasCarburizing::State state;

  explicit Part(int boosted_min, double temperature_degc = 930) : model(make(draws)), state(model.start(20)) {
    GasCarburizing::Workspace workspace(model);
    IntervalInputs inputs;
    inputs.furnace_temperature_degc = temperature_degc;
    inputs.carbon_potential_wt_pct = 1.1;
    for (int i = 0; i < boosted_min; ++i) model.advance(state, inputs, workspace);
  }
  static GasCarburizing make(const std::vector<ItemDraws>& draws) {
    CarburizingPart part;
    part.steel = {0.2, 1.25, 1.1, 0.1, 0.02, 0.25};
    part.lag_s = 900;
    MeshDensity density;
    density.diffusion_length_m = 1.2e-3;
    return GasCarburizing(part, density, draws.front().lanes);
  }
  std::vector<OutlookItem> items(Window window_m = {0.8e-3, 1.2e-3}) const {
    OutlookItem item;
    item.model = &model;
    item.state = &state;
    item.criterion_offset_wt_pct = &draws.front().criterion_offset_wt_pct;
    item.criterion_wt_pct = 0.35;
    item.case_depth_window_m = window_m;
    return {item};
  }
};

FurnaceResponse settled(double degc = 930, double wt_pct = 1.1) {
  FurnaceResponse furnace;
  furnace.temperature_degc = degc;
  furnace.carbon_potential_wt_pct = wt_pct;
  return furnace;
}

const std::vector<PlannedSegment> rest{
    {120 * minute_s, 930, 1.1, 0, {}}, {60 * minute_s, 930, 0.8, 0, {}}, {30 * minute_s, 850, 0.8, 0, {}}};

}  // namespace

TEST_CASE("projection: steps of ten minutes end within 1 um of steps of half a minute, band and median") {
  const Part part(120);
  OutlookOptions fine;
  fine.longest_step_s = 30;
  const Outlook coarse = project(part.items(), rest, settled(), {});
  const Outlook exact = project(part.items(), rest, settled(), {}, fine);
  const auto& a = coarse.end.items[0].case_depth_m;
  const auto& b = exact.end.items[0].case_depth_m;
  CHECK(std::fabs(a.low - b.low) < 1e-6);
  CHECK(std::fabs(a.median - b.median) < 1e-6);
  CHECK(std::fabs(a.high - b.high) < 1e-6);
  CHECK(std::fabs(coarse.end.items[0].surface_carbon_wt_pct.median -
                  exact.end.items[0].surface_carbon_wt_pct.median) < 2e-3);
}

TEST_CASE("projection: the nominal lane is the same part stepped minute by minute in the same furnace") {
  // A furnace that stays at its set points: nothing is projected but time.
  const Part part(120);
  const std::vector<PlannedSegment> stay{{90 * minute_s, 930, 1.1, 0, {}}};
  const Outlook outlook = project(part.items(), stay, settled(), {});
  const Part longer(210);
  CHECK(std::fabs(outlook.end.items[0].nominal_case_depth_m -
                  read_moment(longer.items(), {}).items[0].nominal_case_depth_m) < 5e-7);
}

TEST_CASE("projection: what the furnace shows beside its set point is carried on, and fades") {
  const Part part(120, 915);
  FurnaceResponse cold = settled(915);
  cold.offset_k = -15;
  FurnaceResponse recovering = settled(915);
  FurnaceResponse for_ever = cold;
  for_ever.decay_s = 1e9;
  const auto depth = [&](const FurnaceResponse& furnace) {
    return project(part.items(), rest, furnace, {}).end.items[0].nominal_case_depth_m;
  };
  CHECK(depth(for_ever) < depth(cold));
  CHECK(depth(cold) < depth(recovering));
  // -15 K for all that is left costs about 0.5 % of the depth a kelvin (published sensitivity of the base
  // case, tests/validation/base_case_test.cpp) on the part of the cycle that is left.
  CHECK(depth(for_ever) / depth(recovering) == doctest::Approx(1 - 0.005 * 15 * 0.55).epsilon(0.02));
}

TEST_CASE("projection: a furnace that heats up rises no faster than it does now") {
  const Part part(5, 700);
  FurnaceResponse slow = settled(700, 0.5), fast = slow;
  slow.fastest_rise_k_per_s = 2.0 / 60;
  fast.fastest_rise_k_per_s = 20.0 / 60;
  const auto depth = [&](const FurnaceResponse& furnace) {
    return project(part.items(), rest, furnace, {}).end.items[0].nominal_case_depth_m;
  };
  CHECK(depth(slow) < 0.9 * depth(fast));
}

TEST_CASE(
    "projection: a segment ends when what ends it is projected to happen, at the latest after its longest "
    "time") {
  const Part part(60);
  PlannedSegment boost{60 * minute_s, 930, 1.1, 0,
                       PlannedUntil{PlannedUntil::Kind::case_depth_m, 0, 0.7e-3, 6 * 3600}};
  const Outlook reached = project(part.items(), {boost, rest[1]}, settled(), {});
  const Part longer(60 + static_cast<int>(reached.segment_ends_s[0] / minute_s));
  const double depth = read_moment(longer.items(), {}).items[0].nominal_case_depth_m;
  CHECK(depth == doctest::Approx(0.7e-3).epsilon(0.01));
  boost.until->limit = 5e-3;
  const Outlook never = project(part.items(), {boost, rest[1]}, settled(), {});
  CHECK(never.segment_ends_s[0] == doctest::Approx(6 * 3600));
}

TEST_CASE(
    "projection: the best moment to end lies before the end of a plan that goes too deep, beyond one too "
    "short") {
  const Part part(120);
  const std::vector<PlannedSegment> long_plan{{600 * minute_s, 930, 1.0, 0, {}}};
  const std::vector<PlannedSegment> short_plan{{10 * minute_s, 930, 1.0, 0, {}}};
  const Outlook deep = project(part.items(), long_plan, settled(930, 1.0), {});
  const Outlook shallow = project(part.items(), short_plan, settled(930, 1.0), {});
  CHECK(deep.end.items[0].standing == Standing::deep);
  CHECK(shallow.end.items[0].standing == Standing::shallow);
  CHECK(deep.best_at_s < 600 * minute_s);
  CHECK(shallow.best_at_s > 10 * minute_s);
  CHECK(deep.best_joint_chance > 0.8);
  // Both see the same part in the same furnace: their best moments are the same within the spacing of the
  // looks.
  CHECK(std::fabs(deep.best_at_s - shallow.best_at_s) <= 1800);
}

TEST_CASE("projection: chances of a window add up, and the joint chance is at most each") {
  const Part part(120);
  OutlookItem item = part.items().front();
  item.surface_carbon_window_wt_pct = Window{0.7, 0.85};
  const Outlook outlook = project({item, item}, rest, settled(), {});
  for (const ItemOutlook& each : outlook.end.items) {
    CHECK(each.case_depth.below + each.case_depth.inside + each.case_depth.above == doctest::Approx(1));
    CHECK(each.joint_chance <= std::min(each.case_depth.inside, each.surface_carbon.inside) + 0.02);
    CHECK(outlook.end.joint_chance <= each.joint_chance + 1e-9);
  }
  CHECK(outlook.end.items[0].lab_case_depth.inside < outlook.end.items[0].case_depth.inside + 0.02);
}

TEST_CASE("projection: nothing to project is refused") {
  const Part part(10);
  CHECK_THROWS_AS(project({}, rest, settled(), {}), std::invalid_argument);
  CHECK_THROWS_AS(project(part.items(), {}, settled(), {}), std::invalid_argument);
}
