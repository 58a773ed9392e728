// What becomes of conditions: hold, hysteresis, one alert for a noisy hour, worse, shelf, escalation. The
// rules are the project's own.
#include <doctest/doctest.h>

#include <set>

#include "alert_support.h"

using namespace hearthfront::server;
using namespace hearthfront::server::test;
using hearthfront::storage::AlertRow;
using hearthfront::storage::AlertState;

namespace {

// Each minute from `from` up to and including `to`.
void minutes_of(BookBench& bench, Is is, int from, int to, Severity severity = Severity::warning) {
  for (int m = from; m <= to; ++m) bench.look_at(gap(is, m, 5, 10, severity), m * minute_us);
}

using Words = std::vector<std::string>;

}  // namespace

TEST_CASE("a condition is told after its hold, once, with the time it began") {
  BookBench bench;
  minutes_of(bench, Is::there, 0, 4);
  CHECK(bench.active() == 0);
  CHECK(bench.messages().empty());
  minutes_of(bench, Is::there, 5, 300);
  REQUIRE(bench.active() == 1);
  CHECK(bench.open[0].since_us == 0);
  CHECK(bench.open[0].raised_us == 5 * minute_us);
  CHECK(bench.open[0].last_seen_us == 300 * minute_us);
  CHECK(bench.open[0].sentence == "minute 300.000000");  // the newest words
  CHECK(bench.messages() == Words{"1 raised to phone"});
  CHECK(bench.commits < 40);  // five hours of minutes: what only goes on is hardly worth a commit
}

TEST_CASE("a condition that goes before its hold leaves nothing, and its number is not used again") {
  BookBench bench;
  minutes_of(bench, Is::there, 0, 4);
  minutes_of(bench, Is::gone, 5, 5);
  CHECK(bench.open.empty());
  CHECK(bench.written.removed == std::vector<std::int64_t>{1});
  CHECK(bench.events().empty());
  minutes_of(bench, Is::there, 6, 6);
  CHECK(bench.open.at(0).id == 2);
  CHECK(bench.open[0].since_us == 6 * minute_us);
}

TEST_CASE("an alert is past when its condition has been gone for the whole clear hold") {
  BookBench bench;
  minutes_of(bench, Is::there, 0, 6);
  minutes_of(bench, Is::gone, 7, 16);
  CHECK(bench.active() == 1);
  minutes_of(bench, Is::between, 17, 17);  // not surely gone: the wait begins anew
  minutes_of(bench, Is::gone, 18, 27);
  CHECK(bench.active() == 1);
  minutes_of(bench, Is::gone, 28, 28);
  REQUIRE(bench.open.size() == 1);
  CHECK(bench.open[0].state == AlertState::resting);
  CHECK(bench.open[0].cleared_us == 28 * minute_us);
  CHECK(bench.events() == Words{"raised", "cleared"});
  minutes_of(bench, Is::gone, 29, 87);
  CHECK(bench.open.size() == 1);
  minutes_of(bench, Is::gone, 88, 88);  // the cooling time is over
  CHECK(bench.open.empty());
  CHECK(bench.written.rows.back().state == AlertState::cleared);
  minutes_of(bench, Is::there, 89, 95);
  CHECK(bench.open.at(0).id == 2);
}

TEST_CASE("what comes back within the cooling time is the same alert, counted") {
  BookBench bench;
  minutes_of(bench, Is::there, 0, 6);
  minutes_of(bench, Is::gone, 7, 20);
  minutes_of(bench, Is::between, 21, 40);  // nothing new by that alone
  CHECK(bench.active() == 0);
  minutes_of(bench, Is::there, 41, 41);
  REQUIRE(bench.active() == 1);
  CHECK(bench.open[0].id == 1);
  CHECK(bench.open[0].times == 2);
  CHECK(bench.open[0].since_us == 0);
  CHECK_FALSE(bench.open[0].cleared_us.has_value());
  CHECK(bench.messages() == Words{"1 raised to phone", "1 cleared to phone", "1 came back to phone"});
  std::set<std::string> keys;
  for (const auto& message : bench.written.outbox) keys.insert(message.key);
  CHECK(keys.size() == 3);
}

TEST_CASE("what nobody can judge stays as it is; what can be there no longer is past") {
  BookBench bench;
  minutes_of(bench, Is::there, 0, 6);
  minutes_of(bench, Is::unknown, 7, 200);
  CHECK(bench.active() == 1);
  Findings gone;
  gone.gone_furnaces.insert("f1");
  bench.look_at(gone, 201 * minute_us);
  CHECK(bench.open.at(0).state == AlertState::resting);
}

TEST_CASE("the alert of a load goes with it to another furnace") {
  BookBench bench;
  HandMade load;
  load.view.segment.minutes_left = 5;
  bench.look_at(judge_recipe(load.view, {}), load.view.now_us);
  REQUIRE(bench.active() == 1);
  load.view.row.furnace = "f2";
  load.at(31);
  bench.look_at(judge_recipe(load.view, {}), load.view.now_us);
  CHECK(bench.next_id == 2);
  load.view.segment.minutes_left = 60;
  bench.look_at(judge_recipe(load.view, {}), load.view.now_us);
  CHECK(bench.active() == 0);
}

TEST_CASE("rows read back after a restart go on with the same number, age and hold") {
  BookBench bench;
  minutes_of(bench, Is::there, 0, 3);
  BookBench after;
  after.open = bench.written.rows;  // as stored: one waiting row
  after.next_id = 2;
  REQUIRE(after.open.size() == 1);
  minutes_of(after, Is::there, 4, 5);
  REQUIRE(after.active() == 1);
  CHECK(after.open[0].id == 1);
  CHECK(after.open[0].since_us == 0);
}

TEST_CASE("an alert that gets worse asks again; it never gets milder while it is open") {
  BookBench bench;
  minutes_of(bench, Is::there, 0, 6);
  PersonStep step = acknowledge(bench.open[0], "Night shift", "", 7 * minute_us);
  bench.open[0] = step.row;
  minutes_of(bench, Is::there, 8, 9, Severity::urgent);
  CHECK(bench.open[0].severity == "urgent");
  CHECK_FALSE(bench.open[0].acknowledged_us.has_value());
  minutes_of(bench, Is::there, 10, 12, Severity::note);
  CHECK(bench.open[0].severity == "urgent");
  CHECK(bench.events() == Words{"raised", "worse"});
}

TEST_CASE("one that comes back stays acknowledged") {
  BookBench bench;
  minutes_of(bench, Is::there, 0, 6);
  bench.open[0] = acknowledge(bench.open[0], "Night shift", "", 7 * minute_us).row;
  minutes_of(bench, Is::gone, 8, 20);
  minutes_of(bench, Is::there, 21, 21);
  CHECK(bench.open[0].acknowledged_by == "Night shift");
}

TEST_CASE("of two people who acknowledge at once the second hears who was first") {
  BookBench bench;
  minutes_of(bench, Is::there, 0, 6);
  const PersonStep first = acknowledge(bench.open[0], "Night shift", "on my way", 7 * minute_us);
  CHECK(first.write.events.at(0).text == "on my way");
  REQUIRE(first.write.audits.size() == 1);
  CHECK(first.write.audits[0].subject == "alert 1");
  try {
    acknowledge(first.row, "Supervisor", "", 7 * minute_us);
    FAIL("accepted");
  } catch (const AlertRefusal& refusal) {
    CHECK(refusal.type == "alert-acknowledged");
    CHECK(std::string(refusal.what()).find("Night shift") != std::string::npos);
  }
  CHECK(acknowledge(first.row, "Night shift", "", 8 * minute_us).write.empty());  // pressed twice
}

TEST_CASE("a shelved alert tells nobody, and asks again when its time is over") {
  BookBench bench;
  minutes_of(bench, Is::there, 0, 6);
  bench.open[0] = shelve(bench.open[0], "Supervisor", "known", 100 * minute_us, 7 * minute_us).row;
  minutes_of(bench, Is::gone, 8, 20);
  minutes_of(bench, Is::there, 21, 99, Severity::urgent);
  CHECK(bench.messages() == Words{"1 raised to phone"});
  minutes_of(bench, Is::there, 100, 101, Severity::urgent);
  CHECK(bench.messages() == Words{"1 raised to phone", "1 back from the shelf to phone"});
  CHECK_FALSE(bench.open[0].shelved_until_us.has_value());
}

TEST_CASE("a shelved alert rests until its shelf time is over: the condition cannot ring as another one") {
  BookBench bench;
  minutes_of(bench, Is::there, 0, 6);
  bench.open[0] = shelve(bench.open[0], "Supervisor", "known", 300 * minute_us, 7 * minute_us).row;
  minutes_of(bench, Is::gone, 8, 200);
  minutes_of(bench, Is::there, 201, 210);
  REQUIRE(bench.open.size() == 1);
  CHECK(bench.open[0].id == 1);
  CHECK(bench.messages().size() == 1);
  // Back by hand.
  const PersonStep back = unshelve(bench.parts, bench.open[0], "Supervisor", 211 * minute_us);
  CHECK(back.write.outbox.size() == 1);
  CHECK_THROWS_AS(unshelve(bench.parts, back.row, "Supervisor", 212 * minute_us), AlertRefusal);
}

TEST_CASE(
    "what nobody acknowledges is passed on once to each, after its own time; who was told hears the end") {
  BookBench bench;
  bench.parts.routes = [](const AlertRow&, std::string_view) {
    return std::vector<Route>{{"phone", {}}, {"shift lead", 10.0}, {"manager", 60.0}};
  };
  minutes_of(bench, Is::there, 0, 14);
  CHECK(bench.messages() == Words{"1 raised to phone"});
  minutes_of(bench, Is::there, 15, 40);
  CHECK(bench.messages() == Words{"1 raised to phone", "1 escalated to shift lead"});
  CHECK(bench.open[0].escalated == 1);
  minutes_of(bench, Is::gone, 41, 51);
  CHECK(bench.messages() == Words{"1 raised to phone", "1 escalated to shift lead", "1 cleared to phone",
                                  "1 cleared to shift lead"});
}

TEST_CASE("what is acknowledged is not passed on") {
  BookBench bench;
  bench.parts.routes = [](const AlertRow&, std::string_view) {
    return std::vector<Route>{{"shift lead", 10.0}};
  };
  minutes_of(bench, Is::there, 0, 6);
  bench.open[0] = acknowledge(bench.open[0], "Night shift", "", 7 * minute_us).row;
  minutes_of(bench, Is::there, 8, 100);
  CHECK(bench.messages().empty());
}

TEST_CASE("a past alert takes a note and nothing else") {
  AlertRow row;
  row.id = 3;
  row.state = AlertState::cleared;
  CHECK_THROWS_AS(acknowledge(row, "A", "", 1), AlertRefusal);
  CHECK_THROWS_AS(shelve(row, "A", "r", 2, 1), AlertRefusal);
  BookBench bench;
  CHECK_THROWS_AS(unshelve(bench.parts, row, "A", 1), AlertRefusal);
  const PersonStep step = note(row, "A", "text", 1);
  CHECK(step.write.rows.empty());
  CHECK(step.write.events.at(0).what == "note");
}
