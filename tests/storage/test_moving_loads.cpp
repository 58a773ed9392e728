// Loads that move: stays, chambers with several places, pushes, cancelled loads. The rules are the project's
// own (a chamber never holds more than it can; loads that move together pass through each other).
#include <doctest/doctest.h>

#include "storage/store.h"
#include "storage/support.h"

using namespace hearthfront::storage;
using namespace hearthfront::storage::test;

namespace {

struct Bench {
  Folder folder;
  Store store{at(folder.database())};
  Reader reader{folder.database()};

  std::int64_t create(const LoadRow& row, std::vector<Stay> stays = {}) {
    return store.create_load(row, std::move(stays), by("Morning shift", "start load"));
  }
  LoadChange change(std::int64_t id, std::vector<Stay> stays) {
    const LoadRow row = reader.load(id).value();
    return {row.revision, row, std::move(stays)};
  }
  void revise(std::vector<LoadChange> changes, std::optional<PushRow> push = {}) {
    std::vector<AuditRow> audits(changes.size(), by("Morning shift", "move load"));
    store.revise_loads(std::move(changes), std::move(audits), std::move(push));
  }
};

Stay stay(const std::string& chamber, std::int64_t from_us, std::optional<std::int64_t> to_us = {},
          std::int64_t places = 1) {
  return {"twin-6", chamber, from_us, to_us, places};
}

}  // namespace

TEST_CASE("a load without stays is in its chamber from start to end") {
  Bench bench;
  const auto id = bench.create(load("2291", 100, 200));
  const auto stays = bench.reader.stays(id);
  REQUIRE(stays.size() == 1);
  CHECK(stays[0].furnace == "pit-2");
  CHECK(stays[0].chamber == "main");
  CHECK(stays[0].from_us == 100);
  CHECK(stays[0].to_us == 200);
}

TEST_CASE("two loads of a two-chamber furnace overlap in time but not in a chamber") {
  Bench bench;
  const auto first = bench.create(load("1", 100), {stay("heating", 100, 200), stay("second", 200)});
  const auto second = bench.create(load("2", 200), {stay("heating", 200)});
  std::string text;
  CHECK(fault_of([&] { bench.create(load("3", 300), {stay("second", 300)}); }, &text) ==
        StorageFault::misuse);
  CHECK(contains(text, "Load 1 "));
  CHECK(contains(text, "chamber second"));
  // The first leaves the second chamber and the second takes its place in the same moment.
  bench.revise({bench.change(second, {stay("heating", 200, 400), stay("second", 400)}),
                bench.change(first, {stay("heating", 100, 200), stay("second", 200, 400)})});
  CHECK(bench.reader.stays(second).size() == 2);
  CHECK(bench.reader.load(second)->revision == 2);
  CHECK(bench.reader.revisions(first).size() == 2);
}

TEST_CASE("a zone takes as many loads as it has places at any one moment") {
  Bench bench;
  bench.create(load("1", 100), {stay("zone 1", 100, 300, 2)});
  bench.create(load("2", 200), {stay("zone 1", 200, 400, 2)});
  std::string text;
  CHECK(fault_of([&] { bench.create(load("3", 250), {stay("zone 1", 250, 260, 2)}); }, &text) ==
        StorageFault::misuse);
  CHECK(contains(text, "2 places"));
  // From 300 to 400 only one is there.
  bench.create(load("4", 300), {stay("zone 1", 300, 500, 2)});
}

TEST_CASE("a change of several loads is made whole or not at all, its push with it") {
  Bench bench;
  const auto first = bench.create(load("1", 100), {stay("zone 1", 100, {}, 2)});
  const auto second = bench.create(load("2", 200), {stay("zone 1", 200, {}, 2)});
  auto stale = bench.change(second, {stay("zone 2", 300)});
  stale.expected_revision = 5;
  const PushRow push{"twin-6", 300, "push signal", "signal"};
  CHECK(fault_of([&] {
          bench.revise({bench.change(first, {stay("zone 2", 300)}), stale}, push);
        }) == StorageFault::misuse);
  CHECK(bench.reader.stays(first)[0].chamber == "zone 1");
  CHECK(bench.reader.load(first)->revision == 1);
  CHECK_FALSE(bench.reader.last_push("twin-6", "").has_value());

  bench.revise({bench.change(first, {stay("zone 1", 100, 300, 2), stay("zone 2", 300)})}, push);
  CHECK(bench.reader.last_push("twin-6", "signal")->at_us == 300);
  CHECK_FALSE(bench.reader.last_push("twin-6", "person").has_value());
  CHECK(bench.reader.pushes("twin-6", 0, 1000).size() == 1);
  // The same signal read again after a restart moves nothing a second time.
  CHECK(fault_of([&] { bench.revise({bench.change(second, {stay("zone 1", 200, 300, 2)})}, push); }) ==
        StorageFault::misuse);
  CHECK_FALSE(bench.reader.stays(second)[0].to_us.has_value());
}

TEST_CASE("a cancelled load gives its places back, waits for no result and stays in the list") {
  Bench bench;
  const auto id = bench.create(load("1", 100), {stay("heating", 100)});
  auto change = bench.change(id, {});
  change.row.cancelled = true;
  change.row.ended_us = 150;
  bench.revise({change});
  CHECK(bench.reader.open_loads().empty());
  CHECK(bench.reader.ended_without_result().empty());
  CHECK(bench.reader.ended_touching("twin-6", 0, 1000).empty());
  CHECK(bench.reader.load(id)->cancelled);
  CHECK(bench.reader.loads("pit-2", std::nullopt, 0, 10).size() == 1);
  bench.create(load("1 again", 100), {stay("heating", 100)});
}

TEST_CASE("an ended load is found by every furnace it was in, from when it came there until it ended") {
  Bench bench;
  const auto id =
      bench.create(load("1", 100, 900), {stay("heating", 100, 400), {"pit-2", "main", 500, 900, 1}});
  CHECK(bench.reader.ended_touching("twin-6", 350, 380).size() == 1);
  CHECK(bench.reader.ended_touching("twin-6", 50, 80).empty());
  // It had left by then, but this reading ends the line that the last one before began.
  CHECK(bench.reader.ended_touching("twin-6", 450, 480).size() == 1);
  CHECK(bench.reader.ended_touching("twin-6", 901, 950).empty());
  CHECK(bench.reader.ended_touching("pit-2", 450, 480).empty());
  CHECK(bench.reader.ended_touching("pit-2", 450, 520).size() == 1);
  CHECK(bench.reader.loads("twin-6", std::nullopt, 0, 10).at(0).id == id);
}

TEST_CASE("a revision may correct name and start") {
  Bench bench;
  const auto id = bench.create(load("2219", 100));
  auto change = bench.change(id, {{"pit-2", "main", 90, {}, 1}});
  change.row.name = "2291";
  change.row.started_us = 90;
  bench.revise({change});
  CHECK(bench.reader.load(id)->name == "2291");
  CHECK(bench.reader.load(id)->started_us == 90);
  CHECK(bench.reader.load(id)->person == "Morning shift");
}

TEST_CASE("the table itself refuses two loads in one place, even from a hand in the file") {
  Bench bench;
  const auto id = bench.create(load("1", 100), {stay("heating", 100)});
  Outside outside(bench.folder.database());
  CHECK(contains(outside.failure("INSERT INTO load_stay VALUES(" + std::to_string(id + 1) +
                                 ", 'twin-6', 'heating', 150, NULL, 1)"),
                 "another load"));
  CHECK(contains(outside.failure("UPDATE load_stay SET chamber = 'second'"), "written anew"));
}
