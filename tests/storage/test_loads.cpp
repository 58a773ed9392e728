// Loads, their revisions, notes, results and the audit trail: one load in a chamber at a time, and nothing
// past is rewritten (the project's seventh invariant).
#include <doctest/doctest.h>

#include <atomic>
#include <thread>

#include "storage/store.h"
#include "storage/support.h"

using namespace hearthfront::storage;
using namespace hearthfront::storage::test;

namespace {

struct Bench {
  Folder folder;
  Store store{at(folder.database())};
  Reader reader{folder.database()};

  std::int64_t create(const LoadRow& row) {
    return store.create_load(row, by("Morning shift", "start load"));
  }
};

}  // namespace

TEST_CASE("a load is stored as it was given, with revision 1, its first step and an audit row") {
  Bench bench;
  auto row = load("2291", 5'000'000, 9'000'000);
  row.revision = 7;  // the store's own business
  const auto id = bench.create(row);
  const auto stored = bench.reader.load(id);
  REQUIRE(stored.has_value());
  CHECK(stored->id == id);
  CHECK(stored->name == "2291");
  CHECK(stored->furnace == "pit-2");
  CHECK(stored->chamber == "main");
  CHECK(stored->person == "Morning shift");
  CHECK(stored->started_us == 5'000'000);
  CHECK(stored->ended_us == 9'000'000);
  CHECK(stored->created_us == 1'000);
  CHECK(stored->revision == 1);
  CHECK(stored->definition_json == row.definition_json);
  const auto steps = bench.reader.revisions(id);
  REQUIRE(steps.size() == 1);
  CHECK(steps[0].definition_before.empty());
  CHECK(steps[0].definition_after == row.definition_json);
  const auto audit = bench.reader.audit("load " + std::to_string(id), 10);
  REQUIRE(audit.size() == 1);
  CHECK(audit[0].action == "start load");
  CHECK_FALSE(bench.reader.load(id + 1).has_value());
}

TEST_CASE("two loads cannot be in one chamber at overlapping times") {
  struct Case {
    const char* name;
    std::int64_t started_us;
    std::optional<std::int64_t> ended_us;
    bool fits;
  };
  // Against one load from 100 to 200 and one from 500 without an end.
  const Case cases[]{{"before both", 10, 50, true},
                     {"up to the start", 10, 100, true},
                     {"from the end on", 200, 500, true},
                     {"over the start", 50, 101, false},
                     {"over the end", 199, 250, false},
                     {"inside", 120, 150, false},
                     {"around", 50, 300, false},
                     {"the same", 100, 200, false},
                     {"open, before", 10, std::nullopt, false},
                     {"open, between", 300, std::nullopt, false},
                     {"open, after the open one", 600, std::nullopt, false},
                     {"into the open one", 300, 501, false}};
  for (const Case& tried : cases) {
    CAPTURE(tried.name);
    Bench bench;
    bench.create(load("2291", 100, 200));
    bench.create(load("2292", 500));
    std::string text;
    const auto fault = fault_of([&] { bench.create(load("2293", tried.started_us, tried.ended_us)); }, &text);
    CHECK(fault.has_value() != tried.fits);
    if (!tried.fits) {
      CHECK(fault == StorageFault::misuse);
      CHECK((contains(text, "Load 2291 (number 1)") || contains(text, "Load 2292 (number 2)")));
    }
    CHECK_NOTHROW(bench.create(load("other chamber", tried.started_us, tried.ended_us, "quench")));
    CHECK_NOTHROW(bench.create(load("other furnace", tried.started_us, tried.ended_us, "main", "pit-3")));
  }
}

TEST_CASE("a load that ends before it starts, or has no name, is refused") {
  Bench bench;
  CHECK(fault_of([&] { bench.create(load("2291", 100, 100)); }) == StorageFault::misuse);
  CHECK(fault_of([&] { bench.create(load("2291", 100, 99)); }) == StorageFault::misuse);
  CHECK(fault_of([&] { bench.create(load("", 100)); }) == StorageFault::misuse);
  CHECK(bench.reader.loads("", {}, 0, 10).empty());
  CHECK(bench.reader.audit("", 10).empty());
}

TEST_CASE("of eight people who start a load in one chamber at once, one succeeds") {
  Bench bench;
  for (int round = 0; round < 10; ++round) {
    const std::string furnace = "pit-" + std::to_string(round);
    std::atomic<int> started = 0, refused = 0;
    std::vector<std::thread> people;
    people.reserve(8);
    for (int i = 0; i < 8; ++i) {
      people.emplace_back([&] {
        const auto fault = fault_of([&] { bench.create(load("2291", 100, {}, "main", furnace)); });
        if (!fault) ++started;
        if (fault == StorageFault::misuse) ++refused;
      });
    }
    for (auto& person : people) person.join();
    CHECK(started == 1);
    CHECK(refused == 7);
  }
}

TEST_CASE("a revision names what it replaces, and works only on the newest one") {
  Bench bench;
  const auto id = bench.create(load("2291", 100));
  bench.store.revise_load(id, 1, "{\"plan\":2}", std::nullopt, by("Supervisor", "change recipe", 2'000));
  bench.store.revise_load(id, 2, "", 900, by("Morning shift", "end load", 3'000));
  std::string text;
  CHECK(fault_of([&] { bench.store.revise_load(id, 2, "{}", 950, by("Late", "end load")); }, &text) ==
        StorageFault::misuse);
  CHECK(contains(text, "at revision 3, not 2"));
  CHECK(fault_of([&] { bench.store.revise_load(99, 1, "{}", 950, by("Late", "end load")); }) ==
        StorageFault::misuse);

  const auto stored = bench.reader.load(id);
  CHECK(stored->revision == 3);
  CHECK(stored->definition_json == "{\"plan\":2}");
  CHECK(stored->ended_us == 900);
  const auto steps = bench.reader.revisions(id);
  REQUIRE(steps.size() == 3);
  CHECK(steps[1].at_us == 2'000);
  CHECK(steps[1].person == "Supervisor");
  CHECK(steps[1].what == "change recipe");
  CHECK(steps[1].definition_before == "{\"name\":\"2291\"}");
  CHECK(steps[1].definition_after == "{\"plan\":2}");
  CHECK_FALSE(steps[2].ended_before_us.has_value());
  CHECK(steps[2].ended_after_us == 900);
  CHECK(bench.reader.audit("load " + std::to_string(id), 10).size() == 3);
}

TEST_CASE("a load cannot be reopened or extended into the next one") {
  Bench bench;
  const auto first = bench.create(load("2291", 100, 200));
  bench.create(load("2292", 200));
  std::string text;
  CHECK(fault_of([&] { bench.store.revise_load(first, 1, "", std::nullopt, by("A", "reopen")); }, &text) ==
        StorageFault::misuse);
  CHECK(contains(text, "Load 2292 (number 2)"));
  CHECK(fault_of([&] { bench.store.revise_load(first, 1, "", 201, by("A", "extend")); }) ==
        StorageFault::misuse);
  CHECK_NOTHROW(bench.store.revise_load(first, 1, "", 150, by("A", "shorten")));
}

TEST_CASE("of two people who revise the same revision at once, one is told to read again") {
  Bench bench;
  const auto id = bench.create(load("2291", 100));
  for (std::int64_t revision = 1; revision <= 20; ++revision) {
    std::atomic<int> taken = 0;
    std::vector<std::thread> people;
    people.reserve(8);
    for (int i = 0; i < 2; ++i) {
      people.emplace_back([&] {
        const auto fault =
            fault_of([&] { bench.store.revise_load(id, revision, "{}", {}, by("A", "plan")); });
        if (!fault) ++taken;
      });
    }
    for (auto& person : people) person.join();
    CHECK(taken == 1);
    CHECK(bench.reader.load(id)->revision == revision + 1);
  }
}

TEST_CASE("loads are listed newest first, page by page, by furnace and by being open") {
  Bench bench;
  std::vector<std::int64_t> ids;
  ids.reserve(25);
  for (std::int64_t i = 0; i < 25; ++i)
    ids.push_back(bench.create(load("load " + std::to_string(i), i * 10, i * 10 + 10)));
  const auto open = bench.create(load("open one", 0, {}, "main", "pit-3"));

  std::vector<std::int64_t> seen;
  std::int64_t before = 0;
  for (std::int64_t page = 0; page < 10; ++page) {
    const auto rows = bench.reader.loads("pit-2", std::nullopt, before, 10);
    if (rows.empty()) break;
    for (const auto& row : rows) seen.push_back(row.id);
    before = rows.back().id;
    // What is added meanwhile must not shift the pages.
    bench.create(load("meanwhile", 10'000 + page * 10, 10'010 + page * 10));
  }
  CHECK(seen == std::vector(ids.rbegin(), ids.rend()));
  CHECK(bench.reader.loads("", true, 0, 10).size() == 1);
  CHECK(bench.reader.loads("", true, 0, 10)[0].id == open);
  CHECK(bench.reader.loads("pit-3", false, 0, 10).empty());
  CHECK(bench.reader.loads("pit-2", false, 0, 1'000).size() == 28);
  REQUIRE(bench.reader.open_loads().size() == 1);
  CHECK(bench.reader.open_loads()[0].name == "open one");
  CHECK(fault_of([&] { bench.reader.loads("", {}, 0, 0); }) == StorageFault::misuse);
}

TEST_CASE(
    "ended loads are found by the time they were in their furnace, open ones and other furnaces left out") {
  Bench bench;
  const auto first = bench.create(load("2291", 100, 200));
  const auto second = bench.create(load("2292", 200, 300, "quench"));
  bench.create(load("open one", 250));
  bench.create(load("elsewhere", 100, 900, "main", "pit-3"));
  const auto ids = [&](std::int64_t from_us, std::int64_t to_us) {
    std::vector<std::int64_t> found;
    for (const auto& row : bench.reader.ended_touching("pit-2", from_us, to_us)) found.push_back(row.id);
    return found;
  };
  CHECK(ids(0, 99).empty());
  CHECK(ids(0, 100) == std::vector{first});
  CHECK(ids(150, 150) == std::vector{first});
  CHECK(ids(200, 200) == std::vector{first, second});  // a reading at the very end still belongs to the load
  CHECK(ids(201, 900) == std::vector{second});
  CHECK(ids(301, 900).empty());
}

TEST_CASE("an ended load waits for its result until one of its present revision is stored") {
  Bench bench;
  const auto id = bench.create(load("2291", 100));
  const auto waiting = [&] { return bench.reader.ended_without_result().size(); };
  const auto save = [&](std::int64_t revision) {
    bench.store.save_result(
        {.load = id, .revision = revision, .computed_us = 7, .model_version = "m 1", .result_json = "r"});
  };
  CHECK(waiting() == 0);
  bench.store.revise_load(id, 1, "", 900, by("A", "end load"));
  CHECK(waiting() == 1);
  save(1);
  CHECK(waiting() == 1);
  save(2);
  CHECK(waiting() == 0);
  bench.store.revise_load(id, 2, "", 950, by("A", "correct end"));
  CHECK(waiting() == 1);
}

TEST_CASE("notes belong to a load and come back in order") {
  Bench bench;
  const auto id = bench.create(load("2291", 100));
  const auto first = bench.store.add_note({.id = 0,
                                           .load = id,
                                           .at_us = 5,
                                           .person = "A",
                                           .text = "Probe \xC3\xB6"
                                                   "dd"});
  const auto second =
      bench.store.add_note({.id = 0, .load = id, .at_us = 6, .person = "B", .text = "Burn-off done"});
  CHECK(fault_of([&] {
          bench.store.add_note({.id = 0, .load = 77, .at_us = 6, .person = "B", .text = "?"});
        }) == StorageFault::misuse);
  const auto notes = bench.reader.notes(id);
  REQUIRE(notes.size() == 2);
  CHECK(notes[0].id == first);
  CHECK(notes[0].text ==
        "Probe \xC3\xB6"
        "dd");
  CHECK(notes[1].id == second);
  CHECK(notes[1].person == "B");
}

TEST_CASE("a new result marks the old one and keeps it") {
  Bench bench;
  const auto id = bench.create(load("2291", 100, 900));
  CHECK_FALSE(bench.reader.result(id).has_value());
  const auto result = [&](std::int64_t revision, const std::string& json) {
    return ResultRow{
        .load = id, .revision = revision, .computed_us = 7, .model_version = "m 1", .result_json = json};
  };
  bench.store.save_result(result(1, "first"));
  bench.store.revise_load(id, 1, "{}", 950, by("A", "correct end"));
  bench.store.save_result(result(2, "second"));
  CHECK(bench.reader.result(id)->result_json == "second");
  auto all = bench.reader.results(id);
  REQUIRE(all.size() == 2);
  CHECK(all[0].superseded);
  CHECK(all[0].result_json == "first");
  CHECK_FALSE(all[1].superseded);

  SUBCASE("one of an older revision that comes late does not take its place") {
    bench.store.save_result(result(1, "late"));
    CHECK(bench.reader.result(id)->result_json == "second");
    CHECK(bench.reader.results(id).size() == 3);
  }
  SUBCASE("one of a revision or load that does not exist is refused") {
    CHECK(fault_of([&] { bench.store.save_result(result(3, "?")); }) == StorageFault::misuse);
    auto elsewhere = result(1, "?");
    elsewhere.load = 77;
    CHECK(fault_of([&] { bench.store.save_result(elsewhere); }) == StorageFault::misuse);
    CHECK(bench.reader.result(id)->result_json == "second");
  }
}

TEST_CASE("readings, the audit trail, revisions, notes, loads and results cannot be changed or deleted") {
  Bench bench;
  const auto id = bench.create(load("2291", 100));
  bench.store.append(series(bench.store.register_channel("pit-2", "temperature"), 1, 1), {});
  bench.store.add_note({.id = 0, .load = id, .at_us = 5, .person = "A", .text = "note"});
  bench.store.save_result(
      {.load = id, .revision = 1, .computed_us = 7, .model_version = "m", .result_json = "r"});
  auto entry = by("Supervisor", "change correction");
  entry.subject = "furnace pit-2";
  entry.before_json = "1.00";
  entry.after_json = "1.02";
  bench.store.add_audit(entry);
  const auto audit = bench.reader.audit("furnace pit-2", 10);
  REQUIRE(audit.size() == 1);
  CHECK(audit[0].before_json == "1.00");
  CHECK(audit[0].after_json == "1.02");
  CHECK(bench.reader.audit("", 10).front().subject == "furnace pit-2");

  Outside outside(bench.folder.database());
  for (const char* sql :
       {"UPDATE reading SET value = 1", "DELETE FROM reading", "UPDATE audit SET person = 'x'",
        "DELETE FROM audit", "UPDATE load_revision SET what = 'x'", "DELETE FROM load_revision",
        "UPDATE load_note SET text = 'x'", "DELETE FROM load_note", "DELETE FROM load",
        "UPDATE result SET result_json = 'x'", "DELETE FROM result"}) {
    CAPTURE(sql);
    CHECK(contains(outside.failure(sql), "never"));
  }
}
