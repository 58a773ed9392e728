// The way of readings into storage: checks, outcomes, and what is found in the database afterwards.
// Rules: this project's own (acknowledged means durable; one named reason for each refusal); common
// practice, no source.
#include "server/ingest/accept.h"

#include <doctest/doctest.h>

#include <cmath>
#include <limits>
#include <set>

#include "server/api/http_server.h"
#include "server/base/time_text.h"
#include "server/csv_support.h"
#include "server/settings_support.h"
#include "storage/store.h"

using namespace hearthfront::server;
using namespace hearthfront::test;
namespace storage = hearthfront::storage;

namespace {

constexpr std::int64_t second = 1'000'000;
constexpr std::int64_t noon_us = 1'772'452'800 * second;  // 2026-03-02T12:00:00Z

class FixedClock final : public Clock {
 public:
  std::int64_t now_us() const override { return noon_us; }
  double speed() const override { return 1; }
};

Plant plant_of_two() {
  Plant plant;
  plant.furnaces = {furnace(), furnace()};
  plant.furnaces[1].id = "pit-3";
  return plant;
}

struct Bench {
  explicit Bench(std::size_t max_batch = 10'000) {
    limits.max_batch = max_batch;
    acceptor.emplace(plant, clock, store, limits);
  }
  Accepted accept(const std::vector<RawReading>& items) const { return acceptor->accept(items); }

  ScratchFolder folder;
  Plant plant = plant_of_two();
  FixedClock clock;
  Settings::Ingest limits;
  storage::Store store{storage::StoreOptions{folder.path("a.db"), 50'000, true}};
  std::optional<Acceptor> acceptor;
};

RawReading reading(double value, std::int64_t time_us = noon_us, std::string channel = "temperature",
                   std::string pit = "pit-2") {
  RawReading item;
  item.furnace = std::move(pit);
  item.channel = std::move(channel);
  item.time_us = time_us;
  item.value = value;
  return item;
}

// The outcome of one reading as "stored" or "reason: detail".
std::string outcome_of(const Bench& bench, const RawReading& item) {
  const Accepted accepted = bench.accept({item});
  REQUIRE(accepted.outcomes.size() == 1);
  const ReadingOutcome& outcome = accepted.outcomes[0];
  if (outcome.disposition != Disposition::refused) return std::string(text(outcome.disposition));
  return std::string(text(outcome.refusal)) + ": " + outcome.detail;
}

}  // namespace

TEST_CASE("stored, duplicate, conflict and refused, each in its place and counted") {
  const Bench bench;
  RawReading spoiled = reading(0);
  spoiled.refusal = Refusal::wrong_type;
  spoiled.detail = "value is a string; send a number without quotes";
  spoiled.value_text = "928";
  const Accepted accepted =
      bench.accept({reading(928), spoiled, reading(928), reading(929), reading(930, noon_us + 60 * second)});
  REQUIRE(accepted.outcomes.size() == 5);
  CHECK(accepted.outcomes[0].disposition == Disposition::stored);
  CHECK(accepted.outcomes[1].disposition == Disposition::refused);
  CHECK(accepted.outcomes[1].refusal == Refusal::wrong_type);
  CHECK(accepted.outcomes[1].detail == spoiled.detail);
  CHECK(accepted.outcomes[2].disposition == Disposition::duplicate);
  CHECK(accepted.outcomes[3].disposition == Disposition::conflict);
  CHECK(accepted.outcomes[4].disposition == Disposition::stored);
  CHECK(accepted.stored == 2);
  CHECK(accepted.duplicate == 1);
  CHECK(accepted.conflict == 1);
  CHECK(accepted.refused == 1);

  storage::Reader reader(bench.store.path());
  const std::int64_t channel = bench.acceptor->channel_id("pit-2", "temperature").value();
  const auto kept = reader.accepted(channel, 0, latest_time_us);
  REQUIRE(kept.size() == 1);  // the time with two values is left out
  CHECK(kept[0].value == 930.0);
}

TEST_CASE("each refusal names its reason and what to do") {
  const Bench bench;
  CHECK(outcome_of(bench, reading(928)) == "stored");
  CHECK(outcome_of(bench, reading(928, noon_us, "temperature", "pit2")) ==
        "unknown furnace: the plant file has no furnace \"pit2\" (did you mean \"pit-2\"?)");
  CHECK(outcome_of(bench, reading(928, noon_us, "temprature")) ==
        "unknown channel: furnace \"pit-2\" has no channel \"temprature\" (did you mean \"temperature\"?)");
  CHECK(outcome_of(bench, reading(1100.5)) ==
        "out of range: 1100.5 degC is outside the plausible range 0 to 1100 degC of channel \"temperature\"");
  CHECK(outcome_of(bench, reading(-0.1, noon_us, "carbon-potential")) ==
        "out of range: -0.1 wt_pct is outside the plausible range 0 to 2 wt_pct of channel "
        "\"carbon-potential\"");
  CHECK(outcome_of(bench, reading(std::nan(""))) == "bad number: the value is not finite");
  CHECK(outcome_of(bench, reading(std::numeric_limits<double>::infinity())) ==
        "bad number: the value is not finite");
  CHECK(outcome_of(bench, reading(928, noon_us + 3600 * second)) ==
        "future time: 2026-03-02T13:00:00Z is 60 min ahead of the daemon's clock: check clock and time zone "
        "of the "
        "logger");
  CHECK(outcome_of(bench, reading(928, noon_us - 500 * 86'400 * second)) ==
        "ancient time: 2024-10-18T12:00:00Z is older than 400 days (past_limit_days): is the year right?");
}

TEST_CASE("the limits themselves are allowed") {
  const Bench bench;
  CHECK(outcome_of(bench, reading(0)) == "stored");
  CHECK(outcome_of(bench, reading(1100, noon_us + 120 * second)) == "stored");  // future_tolerance_s = 120
  CHECK(outcome_of(bench, reading(900, noon_us + 120 * second + 1)).substr(0, 11) == "future time");
  CHECK(outcome_of(bench, reading(900, noon_us - 400 * 86'400 * second)) ==
        "stored");  // past_limit_days = 400
  CHECK(outcome_of(bench, reading(900, noon_us - 400 * 86'400 * second - 1)).substr(0, 12) == "ancient time");
  CHECK(outcome_of(bench, reading(900, earliest_time_us)).substr(0, 12) == "ancient time");
}

TEST_CASE("channels of the same name in two furnaces are two channels") {
  const Bench bench;
  CHECK(outcome_of(bench, reading(928)) == "stored");
  CHECK(outcome_of(bench, reading(900, noon_us, "temperature", "pit-3")) == "stored");
  CHECK(bench.acceptor->channel_id("pit-2", "temperature") !=
        bench.acceptor->channel_id("pit-3", "temperature"));
  CHECK(!bench.acceptor->channel_id("pit-2", "x"));
  CHECK(!bench.acceptor->channel_id("x", "temperature"));
}

TEST_CASE("refused readings are kept with what came and why") {
  const Bench bench;
  bench.accept({reading(2000, noon_us + 500'000)});
  storage::Reader reader(bench.store.path());
  const auto refused = reader.refused("pit-2", 10);
  REQUIRE(refused.size() == 1);
  CHECK(refused[0].received_us == noon_us);
  CHECK(refused[0].channel == "temperature");
  CHECK(refused[0].time_text == "2026-03-02T12:00:00.5Z");
  CHECK(refused[0].value_text == "2000");
  CHECK(refused[0].reason == "out of range");
}

TEST_CASE("more items than one group go in several groups, all in order") {
  const Bench bench(7);
  std::vector<RawReading> items;
  for (int i = 0; i < 50; ++i)
    items.push_back(reading(i % 10 == 9 ? 5000 : 900 + i, noon_us - i * 60 * second));
  const Accepted accepted = bench.accept(items);
  CHECK(accepted.stored == 45);
  CHECK(accepted.refused == 5);
  for (std::size_t i = 0; i < 50; ++i) {
    CHECK((accepted.outcomes[i].disposition == Disposition::refused) == (i % 10 == 9));
  }
  CHECK(bench.accept(items).duplicate == 45);
  CHECK(bench.accept({}).outcomes.empty());
}

TEST_CASE("a closed store is a problem to come back with, and says how to go on") {
  Bench bench;
  bench.store.close();
  try {
    bench.accept({reading(928)});
    FAIL("accepted by a closed store");
  } catch (const Problem& problem) {
    CHECK(problem.status == 503);
    CHECK(problem.type == "stopping");
    CHECK(problem.detail == "Send it again in a few seconds, after the restart.");
  }
}

TEST_CASE("every reason has its own words") {
  std::set<std::string_view> words;
  for (const Refusal refusal : all_refusals()) words.insert(text(refusal));
  CHECK(words.size() == 13);
  CHECK(words.count("none") == 0);
}

TEST_CASE("a logger file goes in and reports by line") {
  const Bench bench(3);
  const std::string file =
      "Time,TC1,CP\n"
      "2026-03-02T11:00:00Z,928,1.08\n"
      "2026-03-02T11:01:00Z,9280,1.08\n"
      "yesterday,928,1.08\n"
      "\n"
      "2026-03-02T11:02:00Z,,\n"
      "2026-03-02T11:00:00Z,929,\n"
      "2026-03-02T11:03:00Z,928\n";
  const CsvReport report = accept_csv(*bench.acceptor, file, bench.plant.furnaces[0], mapping());
  CHECK(report.rows == 6);
  CHECK(report.stored == 3);
  CHECK(report.duplicate == 0);
  CHECK(report.conflict == 1);
  CHECK(report.refused == 4);
  CHECK(report.refused_by_reason == std::map<Refusal, std::size_t>{{Refusal::out_of_range, 1},
                                                                   {Refusal::bad_time, 2},
                                                                   {Refusal::broken_row, 1}});
  REQUIRE(report.problems.size() == 4);
  CHECK(report.problems[0].line == 3);
  CHECK(report.problems[0].reason ==
        "out of range: 9280 degC is outside the plausible range 0 to 1100 degC of channel \"temperature\"");
  CHECK(report.problems[1].line == 4);  // two cells of one row, told once
  CHECK(report.problems[1].reason == "bad time: \"yesterday\": the date is not written YYYY-MM-DD");
  CHECK(report.problems[2].line == 7);
  CHECK(report.problems[2].reason ==
        "conflict: channel \"temperature\" has another value at this time already");
  CHECK(report.problems[3].line == 8);
  CHECK(report.problems[3].reason == "broken row: has 2 fields, the mapping needs 3.");

  const CsvReport again =
      accept_csv(*bench.acceptor, file, bench.plant.furnaces[0], mapping(), CsvExtent::whole, 1);
  CHECK(again.stored == 0);
  CHECK(again.duplicate == 4);  // both values of the conflict are stored, so both are known already
  CHECK(again.conflict == 0);
  CHECK(again.problems.size() == 1);
}

TEST_CASE("a logger file that does not fit its mapping changes nothing") {
  const Bench bench;
  CHECK_THROWS_AS(accept_csv(*bench.acceptor, "Zeit;TC1\n1;2\n", bench.plant.furnaces[0], mapping()),
                  Problem);
  CHECK(bench.store.counters().readings_stored == 0);
}
