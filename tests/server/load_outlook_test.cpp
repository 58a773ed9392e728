// The outlook of a running load: what of the furnace is carried on, adopted plans, and what a proposal
// promises.
#include <doctest/doctest.h>

#include <cmath>

#include "live_support.h"
#include "server/base/json_fields.h"
#include "server/live/furnace_response.h"
#include "server/live/proposal.h"
#include "server/live/view.h"

using namespace hearthfront::server;
using namespace hearthfront::server::test;
namespace solver = hearthfront::solver;

namespace {

constexpr std::int64_t minute = 60'000'000;

// Minute readings: what the furnace shows at each minute.
template <class Shown>
void feed(LiveLoad& live, int minutes, Shown shown) {
  const std::int64_t start = live.definition().started_us;
  std::vector<Sample> temperature, potential;
  for (int m = -5; m <= minutes; ++m) {
    const SetPoints at = shown(m);
    temperature.push_back({start + m * minute, at.temperature_degc});
    potential.push_back({start + m * minute, at.carbon_potential_wt_pct});
  }
  for (std::size_t used = 0; used < live.channels().used().size(); ++used)
    live.replace_readings(used, start - 10 * minute, start + (minutes + 1) * minute,
                          live.channels().used()[used].role == Role::temperature ? temperature : potential);
}

template <class Shown>
std::unique_ptr<LiveLoad> running(const std::shared_ptr<const LoadDefinition>& def, int minutes,
                                  Shown shown) {
  auto live = std::make_unique<LiveLoad>(def);
  feed(*live, minutes, shown);
  advance(*live, def->started_us + minutes * minute);
  return live;
}

SetPoints as_asked(int m) {
  return m < 120 ? SetPoints{930, 1.1} : SetPoints{930, 0.8};
}

std::shared_ptr<const LoadDefinition> with_plan(const LoadDefinition& load, int at_min,
                                                std::vector<Segment> segments) {
  LoadDefinition changed = load;
  AdoptedPlan plan{load.started_us + at_min * minute, "Test", "deeper", {"r", std::move(segments), {}}};
  changed.plans.push_back(plan);
  return std::make_shared<const LoadDefinition>(read_stored_definition(stored_definition(changed)));
}

Segment segment(const char* name, double minutes, double degc, double wt_pct) {
  Segment each;
  each.name = name;
  each.duration_min = minutes;
  each.temperature_degc = degc;
  each.carbon_potential_wt_pct = wt_pct;
  return each;
}

}  // namespace

TEST_CASE(
    "outlook: a furnace that holds 14 K below its set point is carried on so; one that follows is not") {
  const auto def = definition();
  const auto cold = running(def, 90, [](int) { return SetPoints{916, 1.1}; });
  CHECK(furnace_response(*cold).offset_k == doctest::Approx(-14));
  CHECK(furnace_response(*cold).offset_carbon_potential_wt_pct == doctest::Approx(0).scale(1));
  const auto good = running(def, 90, as_asked);
  CHECK(furnace_response(*good).offset_k == doctest::Approx(0).scale(1));
}

TEST_CASE("outlook: a furnace on its way shows no offset, and heats on at its own rate") {
  const auto def = definition();
  const auto heating = running(def, 40, [](int m) { return SetPoints{700 + 4.0 * std::max(0, m), 1.1}; });
  const solver::FurnaceResponse response = furnace_response(*heating);
  CHECK(response.offset_k == 0);
  CHECK(response.fastest_rise_k_per_s * 60 == doctest::Approx(4).epsilon(0.05));
  // Just changed from boost to diffuse: the gas is thinning out.
  const auto thinning = running(def, 126, [](int m) {
    return SetPoints{930, m < 120 ? 1.1 : 1.1 - 0.02 * (m - 120)};
  });
  CHECK(std::fabs(furnace_response(*thinning).offset_carbon_potential_wt_pct) < 0.02);
}

TEST_CASE("outlook: what is left of the recipe begins with the rest of the present segment") {
  const auto def = definition();
  const auto live = running(def, 90, as_asked);
  const OutlookStart start = outlook_start(*live, def);
  REQUIRE(start.base);
  REQUIRE(start.base->rest.size() == 2);
  CHECK(start.base->rest[0].name == "boost");
  CHECK(start.base->rest[0].duration_min == doctest::Approx(30));
  CHECK(start.base->rest[1].duration_min == 60);
  const auto outlook = make_outlook(*start.base, start.base->rest, {});
  CHECK(outlook->ends_us == def->started_us + 180 * minute);
}

TEST_CASE(
    "outlook: a segment that waits for a depth beyond its estimate is not over, and shows how long it "
    "waits") {
  LoadDefinition waits = *definition();
  Segment& boost = waits.recipe.segments[0];
  boost.until = Until{Until::Kind::case_depth, "A", 0.8};
  boost.longest_min = 600;
  const auto def = std::make_shared<const LoadDefinition>(waits);
  // At 930 degC and 1.1 % C a depth of 0.8 mm takes about five hours; the estimate was two.
  const auto live = running(def, 140, [](int) { return SetPoints{930, 1.1}; });
  REQUIRE(live->recipe_place().now().index == 0);
  const OutlookStart start = outlook_start(*live, def);
  REQUIRE(start.base);
  REQUIRE(start.base->rest.size() == 2);
  const auto outlook = make_outlook(*start.base, start.base->rest, {});
  CHECK(outlook->ends_us > def->started_us + (140 + 60 + 20) * minute);
  // What is shown is fixed times along which the load ends the same, so that a trial can begin from them.
  double shown_min = 0;
  for (const Segment& segment : outlook->rest) shown_min += segment.duration_min;
  CHECK(shown_min == doctest::Approx(static_cast<double>(outlook->ends_us - outlook->at_us) / minute));
}

TEST_CASE(
    "outlook: there is none of an ended load, none outside a furnace, none before the members have "
    "followed") {
  const auto def = definition();
  auto live = std::make_unique<LiveLoad>(def);
  feed(*live, 60, as_asked);
  live->advance_to(def->started_us + 60 * minute);
  CHECK(outlook_start(*live, def).missing == "Bands are still being worked out after a start or a change.");
  const auto ended = definition(R"("ended_at":"2026-03-02T07:00:00Z",)");
  CHECK(outlook_start(*running(ended, 70, as_asked), ended).missing == "The load has ended.");
}

TEST_CASE(
    "outlook: the nominal end and the median of the band are what the load comes to when all goes as "
    "planned") {
  const auto def = definition();
  const auto half = running(def, 90, as_asked);
  const auto start = outlook_start(*half, def);
  const auto outlook = make_outlook(*start.base, start.base->rest, {});
  const auto whole = running(def, 180, as_asked);
  const RunResult end = read_result(*whole, def);
  for (std::size_t i = 0; i < def->items.size(); ++i) {
    // The projected gas follows its set point in about 12 minutes, this log's at once.
    CHECK(outlook->ahead.end.items[i].nominal_case_depth_m * 1e3 ==
          doctest::Approx(*end.items[i].finished_case_depth_mm).epsilon(0.02));
    CHECK(outlook->ahead.end.items[i].case_depth_m.median ==
          doctest::Approx(end.members->items[i].case_depth_m.median).epsilon(0.025));
  }
}

TEST_CASE(
    "outlook: a gap widens the band, the longer the wider, and measuring again narrows what is to come") {
  const auto def = definition();
  const auto width = [&](int gap_from, int gap_to) {
    LiveLoad live(def);
    const Log log = noisy_log(*def, 170, gap_from, gap_to);
    read_all(live, [&] {
      ReadingSource source;
      source.readings = [&](const LoadChannels::Used& used, std::int64_t, std::int64_t) {
        return log.at(used.name);
      };
      source.marks = [](const LoadChannels::Used&, std::int64_t, std::int64_t) {
        return std::vector<TimeSpan>{};
      };
      return source;
    }());
    advance(live, def->started_us + 170 * minute);
    const auto band = read_result(live, def).members->items[0].case_depth_m;
    return band.high - band.low;
  };
  const double none = width(0, 0), half_an_hour = width(60, 90), two_hours = width(40, 160);
  CHECK(half_an_hour > none * 1.001);
  CHECK(two_hours > half_an_hour * 1.02);
}

TEST_CASE("plan: adopting one changes nothing before it, bit for bit, and is the recipe from then on") {
  const auto def = definition();
  const auto planned =
      with_plan(*def, 90, {segment("boost", 80, 930, 1.15), segment("diffuse", 30, 930, 0.75)});
  // Readings stop at 40 min: what the model assumes from there on is the recipe, and then the plan.
  const auto shown = [](int) { return SetPoints{930, 1.1}; };
  LiveLoad before(def), after(planned);
  feed(before, 40, shown);
  feed(after, 40, shown);
  advance(before, def->started_us + 200 * minute);
  advance(after, def->started_us + 200 * minute);
  std::size_t at = 0, same = 0;
  std::vector<double> assumed;
  before.each_point([&](const RunPoint& point) { assumed.push_back(point.input.carbon_potential_wt_pct); });
  after.each_point([&](const RunPoint& point) {
    const double minutes = static_cast<double>(point.from_us - def->started_us) / minute;
    if (minutes < 90) {
      CHECK(point.input.carbon_potential_wt_pct == assumed[at]);
      ++same;
    } else if (minutes < 170) {
      CHECK(point.input.carbon_potential_wt_pct == doctest::Approx(1.15));
    } else {
      CHECK(point.input.carbon_potential_wt_pct == doctest::Approx(0.75));
    }
    ++at;
  });
  CHECK(same == 90);
  const auto& runs = after.recipe_place().runs();
  REQUIRE(runs.size() == 3);
  CHECK(runs[1].by == PlacedBy::plan);
  CHECK(runs[1].plan == 1);
  CHECK(runs[2].index == 1);
}

TEST_CASE("plan: live with the plan adopted under way = replay of the definition that has it") {
  const auto def = definition();
  const auto live = running(def, 100, as_asked);
  const auto planned =
      with_plan(*def, 100, {segment("boost", 60, 930, 1.1), segment("diffuse", 40, 930, 0.8)});
  const auto shown = [](int m) { return m < 160 ? SetPoints{930, 1.1} : SetPoints{930, 0.8}; };
  // After a revision the engine begins the load anew from its readings.
  const auto again = running(planned, 200, shown);
  LiveLoad in_steps(planned);
  feed(in_steps, 200, shown);
  for (int m = 1; m <= 200; m += 7) advance(in_steps, planned->started_us + m * minute);
  advance(in_steps, planned->started_us + 200 * minute);
  CHECK(result_of(in_steps, planned) == result_of(*again, planned));
  CHECK(result_of(*again, planned).find("\"by\":\"plan\"") != std::string::npos);
}

TEST_CASE("proposal: a load that ran cold is saved, confirmed on members drawn afresh, and says what to do") {
  const auto def = definition();
  const auto cold = running(def, 100, [](int) { return SetPoints{890, 1.1}; });
  const auto start = outlook_start(*cold, def);
  REQUIRE(start.base);
  LoadDefinition narrow = *def;
  for (Item& item : narrow.items) item.case_depth_window_mm = {0.5, 0.8};
  OutlookBase base = *start.base;
  base.definition = std::make_shared<const LoadDefinition>(narrow);
  const Proposal proposal = propose(base, {0.8, {}});
  INFO(proposal.sentence);
  CHECK(proposal.present->ahead.end.joint_chance < 0.6);
  REQUIRE(proposal.found);
  CHECK(proposal.confirmed_joint_chance >= 0.8);
  CHECK(proposal.minutes_more > 0);
  CHECK_FALSE(proposal.changes.empty());
  // The outlook along it, with the load's own members, agrees.
  CHECK(proposal.outlook->ahead.end.joint_chance ==
        doctest::Approx(proposal.confirmed_joint_chance).epsilon(0.05));
}

TEST_CASE("proposal: a window that is already passed has no plan, and the reason names the item") {
  const auto def = definition();
  const auto live = running(def, 170, [](int) { return SetPoints{930, 1.1}; });
  const auto start = outlook_start(*live, def);
  REQUIRE(start.base);
  LoadDefinition passed = *def;
  passed.items[0].case_depth_window_mm = {0.2, 0.35};
  OutlookBase base = *start.base;
  base.definition = std::make_shared<const LoadDefinition>(passed);
  const Proposal proposal = propose(base, {0.9, {}});
  CHECK_FALSE(proposal.found);
  CHECK(proposal.reason == "Item A is already deeper than its window; no schedule takes case depth back.");
}

TEST_CASE("proposal: history in stretches of ten minutes brings fresh members to where minutes would") {
  const auto def = definition();
  const auto live = running(def, 150, as_asked);
  const auto start = outlook_start(*live, def);
  REQUIRE(start.base);
  CHECK(start.base->history.size() < 40);
  MemberStates states = start_members(*def, *start.base->members);
  for (std::size_t i = 0; i < states.size(); ++i) {
    solver::GasCarburizing::Workspace workspace(start.base->members->models[i]);
    for (const auto& inputs : start.base->history)
      start.base->members->models[i].advance(states[i], inputs, workspace);
  }
  const auto merged = solver::read_moment(outlook_items(*def, *start.base->members, states), {});
  const auto minutes = solver::read_moment(outlook_items(*def, *start.base->members, start.base->states), {});
  for (std::size_t i = 0; i < def->items.size(); ++i)
    CHECK(std::fabs(merged.items[i].case_depth_m.median - minutes.items[i].case_depth_m.median) < 1e-6);
}

TEST_CASE("words: changes of a plan are told as minutes and set points") {
  const std::vector<Segment> present{segment("boost", 30, 930, 1.1), segment("diffuse", 60, 930, 0.8)};
  CHECK(changes_between(present, {segment("boost", 45, 930, 1.15), segment("diffuse", 60, 930, 0.8)}) ==
        std::vector<std::string>{
            "boost: 15 min longer (45 min from now on); carbon potential 1.15 instead of 1.10 % C"});
  CHECK(changes_between(present, present).empty());
}
