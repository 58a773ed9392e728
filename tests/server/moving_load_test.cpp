// Identities of loads that move, come late, or are seen through several sources (design: moved = not moved
// where both chambers read the same; late = on time; rework = one long load).
#include <doctest/doctest.h>

#include <algorithm>
#include <random>

#include "live_support.h"
#include "server/live/push_line.h"
#include "server/live/view.h"
#include "solver/atmosphere/carbon_gas.h"
#include "solver/material/activity.h"

using namespace hearthfront::server;
using namespace hearthfront::server::test;

namespace {

constexpr std::int64_t minute = 60'000'000;

Channel channel(const std::string& name, Role role, Unit unit, const std::string& chamber, double high) {
  return {name, role, unit, chamber, 0, high, 60, 300, 600};
}

// f1 with one chamber and "twin" with two; every chamber has a temperature and a logged carbon potential.
Plant two_furnaces() {
  Plant plant = small_plant();
  Furnace twin = plant.furnaces.front();
  twin.id = "twin";
  twin.chambers = {{"a", "A", 1}, {"b", "B", 1}};
  twin.channels.clear();
  for (const char* chamber : {"a", "b"}) {
    twin.channels.push_back(
        channel(std::string(chamber) + "_t", Role::temperature, Unit::degc, chamber, 1100));
    twin.channels.push_back(
        channel(std::string(chamber) + "_c", Role::carbon_potential, Unit::weight_percent, chamber, 2));
  }
  plant.furnaces.push_back(twin);
  return plant;
}

std::shared_ptr<const LoadDefinition> load(const std::string& extra) {
  std::string text = load_text(extra);
  text.replace(text.find("\"f1\""), 4, "\"twin\"");
  return std::make_shared<const LoadDefinition>(read_load_body(text, two_furnaces()));
}

// What f1 logs, in both chambers of the twin furnace.
Log twin_log(const LoadDefinition& def, int minutes) {
  const Log one = noisy_log(def, minutes);
  return {{"a_t", one.at("temperature")},
          {"b_t", one.at("temperature")},
          {"a_c", one.at("potential")},
          {"b_c", one.at("potential")}};
}

double depth_mm(const LiveLoad& live, std::size_t item) {
  return *read_result(live, std::make_shared<const LoadDefinition>(live.definition()))
              .items[item]
              .case_depth_mm;
}

const std::string stays_in_a = R"("chamber":"a",)";
const std::string moves_to_b =
    R"("path":[{"from":"2026-03-02T06:00:00Z","furnace":"twin","chamber":"a"},{"from":"2026-03-02T07:17:23Z","furnace":"twin","chamber":"b"}],)";

}  // namespace

TEST_CASE("moved = not moved, where both chambers read the same") {
  const auto stayed = load(stays_in_a), moved = load(moves_to_b);
  const Log log = twin_log(*stayed, 180);
  const std::int64_t end = stayed->started_us + 180 * minute;
  const auto one = derive(stayed, source_of(log), end), two = derive(moved, source_of(log), end);
  // Readings of one minute are cut in two and put together again: round-off, no more.
  for (std::size_t i = 0; i < 2; ++i)
    CHECK(depth_mm(*two, i) == doctest::Approx(depth_mm(*one, i)).epsilon(1e-10));
}

TEST_CASE("after the move only the second chamber counts") {
  const auto moved = load(moves_to_b);
  Log log = twin_log(*moved, 180);
  const std::int64_t end = moved->started_us + 180 * minute, at = moved->path[1].from_us;
  const std::string before = result_of(*derive(moved, source_of(log), end), moved);
  for (Sample& sample : log["a_c"])
    if (sample.time_us > at + 10 * minute) sample.value = 0.1;
  CHECK(result_of(*derive(moved, source_of(log), end), moved) == before);
  for (Sample& sample : log["b_c"])
    if (sample.time_us > at + 10 * minute) sample.value = 0.9;
  CHECK(result_of(*derive(moved, source_of(log), end), moved) != before);
}

TEST_CASE("late = on time, in any order, across a move") {
  const auto moved = load(moves_to_b);
  const Log log = twin_log(*moved, 180);
  const std::int64_t end = moved->started_us + 180 * minute;
  const std::string wanted = result_of(*derive(moved, source_of(log), end), moved);
  LiveLoad live(moved);
  std::vector<std::pair<std::size_t, Sample>> all;
  for (std::size_t i = 0; i < live.channels().used().size(); ++i)
    for (const Sample& sample : log.at(live.channels().used()[i].name)) all.emplace_back(i, sample);
  std::mt19937 random(5);
  std::shuffle(all.begin(), all.end(), random);
  for (std::size_t i = 0; i < all.size(); ++i) {
    const auto& [used, sample] = all[i];
    live.replace_readings(used, sample.time_us, sample.time_us, {sample});
    if (i % 50 == 0) advance(live, end);
  }
  advance(live, end);
  CHECK(result_of(live, moved) == wanted);
}

TEST_CASE("outside any furnace nothing is taken up, the parts cool, and the basis is planned") {
  const auto outside = load(
      R"("path":[{"from":"2026-03-02T06:00:00Z","furnace":"twin","chamber":"a"},{"from":"2026-03-02T07:00:00Z","outside":true},)"
      R"({"from":"2026-03-02T10:00:00Z","furnace":"f1","chamber":"main"}],)");
  CHECK(outside->furnaces.size() == 2);
  const Log log = twin_log(*outside, 60);
  const auto hot = derive(outside, source_of(log), outside->started_us + 60 * minute);
  const auto cold = derive(outside, source_of(log), outside->started_us + 230 * minute);
  const auto before = read_result(*hot, outside), after = read_result(*cold, outside);
  CHECK(after.items[0].carbon_uptake_g_m2 ==
        doctest::Approx(before.items[0].carbon_uptake_g_m2).epsilon(1e-9));
  CHECK(after.items[0].part_temperature_degc < 200);
  CHECK(after.gaps.back().span.basis == Basis::planned);
  CHECK(make_view(*cold, outside, cold->state_us(), 1e9).message.find("Outside") != std::string::npos);
}

TEST_CASE("a rework that goes on where a load ended is as deep as one long load") {
  const Plant plant = two_furnaces();
  const auto whole = load(stays_in_a);
  const Log log = twin_log(*whole, 180);
  const std::int64_t middle = whole->started_us + 90 * minute, end = whole->started_us + 180 * minute;
  const auto first = read_result(*derive(whole, source_of(log), middle), whole);

  Item item = whole->items[0];
  item.initial =
      InitialProfile{1, "A", first.items[0].profile_depth_mm, first.items[0].profile_carbon_wt_pct};
  LoadDefinition second = *whole;
  second.started_us = middle;
  second.path = {{middle, "twin", "a"}};
  // Hot as it was, and in the second half of the recipe.
  second.charge_temperature_degc = first.items[0].part_temperature_degc;
  second.items = {item};
  const auto rework = std::make_shared<const LoadDefinition>(second);
  const auto reread =
      std::make_shared<const LoadDefinition>(read_stored_definition(stored_definition(second)));
  const auto two = derive(rework, source_of(log), end);
  const auto one = derive(whole, source_of(log), end);
  // Meshes differ, so profiles are read at other nodes: half a micrometre (solver/README.md, rework).
  CHECK(depth_mm(*two, 0) == doctest::Approx(depth_mm(*one, 0)).epsilon(1e-3));
  CHECK(result_of(*derive(reread, source_of(log), end), reread) == result_of(*two, rework));
}

TEST_CASE("emf, CO2 and dew point of one gas give one carbon potential; the order says who leads") {
  Plant plant = small_plant();
  Furnace& furnace = plant.furnaces.front();
  furnace.channels = {channel("temperature", Role::temperature, Unit::degc, "main", 1100),
                      channel("emf", Role::probe_emf, Unit::millivolt, "main", 1400),
                      channel("co2", Role::co2, Unit::volume_percent, "main", 5),
                      channel("dew", Role::dew_point, Unit::degc, "main", 60)};
  const auto def = std::make_shared<const LoadDefinition>(read_load_body(load_text(), plant));
  namespace s = hearthfront::solver;
  const double t_k = 930 + 273.15;
  const double activity = s::carbon_activity(0.9, t_k);
  const s::CarbonGas gas{0.20, 0.40, 1.01325};
  Log log;
  for (int m = -5; m <= 60; ++m) {
    const std::int64_t t = def->started_us + m * minute;
    log["temperature"].push_back({t, 930});
    log["emf"].push_back({t, s::emf_mv_at_activity(activity, t_k, gas)});
    log["co2"].push_back({t, 100 * s::co2_fraction_at_activity(activity, t_k, gas)});
    log["dew"].push_back({t, s::dew_point_degc_at_activity(activity, s::DewSurface::water, t_k, gas)});
  }
  const std::int64_t now = def->started_us + 60 * minute;
  const auto agreeing = read_result(*derive(def, source_of(log), now), def);
  REQUIRE(agreeing.sources.size() == 3);
  for (const SourceValue& each : agreeing.sources)
    CHECK(each.carbon_potential_wt_pct == doctest::Approx(0.9).epsilon(1e-6));
  CHECK(agreeing.sources[0].source == CarbonSource::probe_emf);
  CHECK(agreeing.sources[0].leads);
  CHECK(*agreeing.disagreement_wt_pct < 1e-6);

  // A probe that reads 12 mV high is 0.14 % C rich (section 3.5 of the error table in tests/solver: 0.012 a
  // mV).
  Log high = log;
  for (Sample& sample : high["emf"]) sample.value += 12;
  const auto apart = make_view(*derive(def, source_of(high), now), def, now, 300);
  CHECK(*apart.result.disagreement_wt_pct == doctest::Approx(0.145).epsilon(0.15));
  CHECK(apart.message.find("disagree") != std::string::npos);

  // A silent probe gives way to an analyser that still speaks.
  Log silent = log;
  std::erase_if(silent["emf"], [&](const Sample& sample) { return sample.time_us > now - 20 * minute; });
  const auto other = read_result(*derive(def, source_of(silent), now), def);
  REQUIRE(other.sources.size() == 2);
  CHECK(other.sources[0].source == CarbonSource::co2);
  CHECK(other.sources[0].leads);
  CHECK(other.carbon_potential.measured_s == doctest::Approx(3600));
}

TEST_CASE("a push takes each tray on by one; zone and end follow from its position") {
  Furnace line;
  line.line = true;
  line.chambers = {{"heat", "Heat", 2}, {"boost", "Boost", 3}};
  CHECK(zone_at(line, 1) == "heat");
  CHECK(zone_at(line, 2) == "heat");
  CHECK(zone_at(line, 3) == "boost");
  CHECK(zone_at(line, 5) == "boost");
  CHECK_FALSE(zone_at(line, 6).has_value());
  // A counter that steps, one that was reset, a contact that closes and opens again.
  const hearthfront::storage::Reading four{1, 0, 4};
  using Times = std::vector<std::int64_t>;
  CHECK(rises({{1, 10, 4}, {1, 20, 4}, {1, 30, 5}, {1, 40, 0}, {1, 50, 1}}, four) == Times{30, 50});
  CHECK(rises({{1, 10, 1}, {1, 20, 0}, {1, 30, 1}}, std::nullopt) == Times{30});
  // Pushed three times in a gap of the log.
  CHECK(rises({{1, 30, 7}}, four) == Times{10, 20, 30});
}
