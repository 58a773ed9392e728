// Live = replay: however readings come, the run ends in the same bits (design invariant 2).
#include "server/live/live_load.h"

#include <doctest/doctest.h>

#include <algorithm>

#include "live_support.h"
#include "server/live/view.h"

using namespace hearthfront::server;
using namespace hearthfront::server::test;

namespace {

constexpr std::int64_t minute = 60'000'000;

struct Arrival {
  std::size_t used;
  Sample sample;
};

std::vector<Arrival> arrivals(const LiveLoad& load, const Log& log) {
  std::vector<Arrival> all;
  for (std::size_t i = 0; i < load.channels().used().size(); ++i)
    for (const Sample& sample : log.at(load.channels().used()[i].name)) all.push_back({i, sample});
  std::sort(all.begin(), all.end(),
            [](const Arrival& a, const Arrival& b) { return a.sample.time_us < b.sample.time_us; });
  return all;
}

void take(LiveLoad& load, const Arrival& arrival) {
  load.replace_readings(arrival.used, arrival.sample.time_us, arrival.sample.time_us, {arrival.sample});
}

}  // namespace

TEST_CASE("fed reading by reading with a view every half minute, the result equals one replay") {
  const auto def = definition();
  const Log log = noisy_log(*def, 200, 100, 125);
  const std::int64_t end = def->started_us + 195 * minute + 12'345'678;
  const std::string replayed = result_of(*derive(def, source_of(log), end), def);

  LiveLoad live(def);
  std::int64_t now = def->started_us;
  for (const Arrival& arrival : arrivals(live, log)) {
    while (now < arrival.sample.time_us && now < end) {
      advance(live, now);
      now += minute / 2;
    }
    take(live, arrival);
  }
  advance(live, end);
  CHECK(result_of(live, def) == replayed);
}

TEST_CASE("fed in random order, with views in between, the result equals one replay") {
  const auto def = definition();
  const Log log = noisy_log(*def, 150);
  const std::int64_t end = def->started_us + 150 * minute;
  const std::string replayed = result_of(*derive(def, source_of(log), end), def);
  for (const unsigned seed : {1u, 2u, 3u}) {
    LiveLoad live(def);
    auto order = arrivals(live, log);
    std::mt19937 random(seed);
    std::shuffle(order.begin(), order.end(), random);
    for (std::size_t i = 0; i < order.size(); ++i) {
      take(live, order[i]);
      if (i % 40 == 0) advance(live, end);
    }
    advance(live, end);
    CAPTURE(seed);
    CHECK(result_of(live, def) == replayed);
  }
}

TEST_CASE("a late block rewinds and ends where it would have ended in time") {
  const auto def = definition();
  const Log log = noisy_log(*def, 180);
  const std::int64_t end = def->started_us + 180 * minute;
  const std::string replayed = result_of(*derive(def, source_of(log), end), def);
  LiveLoad live(def);
  std::vector<Arrival> late;
  for (const Arrival& arrival : arrivals(live, log)) {
    const std::int64_t at = arrival.sample.time_us - def->started_us;
    if (at > 40 * minute && at < 70 * minute)
      late.push_back(arrival);
    else
      take(live, arrival);
  }
  advance(live, end);
  CHECK(result_of(live, def) != replayed);
  for (const Arrival& arrival : late) take(live, arrival);
  advance(live, end);
  CHECK(result_of(live, def) == replayed);
}

TEST_CASE("a clock set back shows the earlier moment again, and forward the same as before") {
  const auto def = definition();
  const Log log = noisy_log(*def, 150);
  const std::int64_t end = def->started_us + 150 * minute;
  LiveLoad live(def);
  read_all(live, source_of(log));
  advance(live, end);
  const std::string first = result_of(live, def);
  advance(live, def->started_us + 60 * minute);
  CHECK(result_of(live, def) == result_of(*derive(def, source_of(log), def->started_us + 60 * minute), def));
  advance(live, end);
  CHECK(result_of(live, def) == first);
}

TEST_CASE("marks stay few however long the load") {
  const auto def = definition();
  LiveLoad live(def);
  read_all(live, source_of(noisy_log(*def, 3000)));
  advance(live, def->started_us + 3000 * minute);
  CHECK(live.marks() < 60);
}

TEST_CASE("what was logged after the end of a load is not its business") {
  const auto ended = definition(R"("ended_at":"2026-03-02T08:30:00Z",)");
  const Log log = noisy_log(*ended, 300);
  Log cut = log;
  for (auto& [channel, samples] : cut)
    std::erase_if(samples, [&](const Sample& sample) { return sample.time_us > *ended->ended_us; });
  const auto a = derive(ended, source_of(log), *ended->ended_us + 3600 * 1'000'000LL);
  const auto b = derive(ended, source_of(cut), *ended->ended_us);
  CHECK(a->at_end());
  CHECK(result_of(*a, ended) == result_of(*b, ended));
}

TEST_CASE("a 25-minute gap is said: seconds by basis, stretches, and a sentence while it lasts") {
  const auto def = definition();
  const Log log = noisy_log(*def, 180, 60, 85);
  const auto load = derive(def, source_of(log), def->started_us + 180 * minute);
  const RunResult result = read_result(*load, def);
  // Last reading 59:31, next 85:31: 26 min, of which 5 are carried as measured, 5 held, 16 planned.
  CHECK(result.carbon_potential.held_s == doctest::Approx(300));
  CHECK(result.carbon_potential.planned_s == doctest::Approx(16 * 60));
  CHECK(result.carbon_potential.measured_s == doctest::Approx(180 * 60 - 21 * 60));
  REQUIRE(result.gaps.size() == 4);
  CHECK(result.gaps[0].input == "temperature");
  CHECK(result.gaps[0].span.basis == Basis::held);

  const auto within = derive(def, source_of(log), def->started_us + 68 * minute);
  const LoadView view = make_view(*within, def, def->started_us + 68 * minute, 3600);
  CHECK(view.carbon_potential.basis == Basis::held);
  CHECK(view.message == "Carbon potential silent for 8 min: last value held.");
  const auto later = derive(def, source_of(log), def->started_us + 80 * minute);
  CHECK(make_view(*later, def, def->started_us + 80 * minute, 3600).message ==
        "Carbon potential silent for 20 min: recipe value assumed.");
  CHECK(make_view(*later, def, def->started_us + 80 * minute, 300).condition == Condition::stale);
}

TEST_CASE("without any reading the load stands on its recipe and says so") {
  const auto def = definition();
  const auto load = derive(def, source_of({}), def->started_us + 60 * minute);
  const LoadView view = make_view(*load, def, def->started_us + 60 * minute, 300);
  CHECK(view.condition == Condition::no_data_yet);
  CHECK(view.temperature.basis == Basis::planned);
  CHECK(view.result.temperature.planned_s == doctest::Approx(3600));
}

TEST_CASE("the stored copy of a definition gives the same run as the body it came from") {
  const auto def = definition();
  const auto again = std::make_shared<const LoadDefinition>(read_stored_definition(stored_definition(*def)));
  const Log log = noisy_log(*def, 120);
  const std::int64_t end = def->started_us + 120 * minute;
  CHECK(result_of(*derive(def, source_of(log), end), def) ==
        result_of(*derive(again, source_of(log), end), again));
}
