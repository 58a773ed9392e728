// Trays of a pusher line against a real store: where they are after pushes, when they are entered late, put
// into a later zone by hand, or put on while the line is pushed. The rules are the project's own.
#include <doctest/doctest.h>

#include "live_support.h"
#include "server/live/push_line.h"
#include "store_support.h"

using namespace hearthfront::server;
using namespace hearthfront::server::test;
namespace storage = hearthfront::storage;

namespace {

constexpr std::int64_t minute = 60'000'000;

Plant line_plant() {
  Plant plant = small_plant();
  Furnace& line = plant.furnaces.front();
  line.line = true;
  line.chambers = {{"heat", "Heat", 2}, {"boost", "Boost", 3}, {"quench", "Quench", 1}};
  line.channels.clear();
  return plant;
}

struct Line {
  StoreFolder folder;
  storage::Store store{folder.options()};
  storage::Reader reader{folder.options().path};
  Plant plant = line_plant();
  std::int64_t start_us = definition()->started_us;

  LoadDefinition tray(const std::string& extra = "") { return read_load_body(load_text(extra), plant); }
  std::int64_t put(const LoadDefinition& load, std::optional<storage::LineSeen> seen = {}) {
    return store.create_load(row_of(load), stays_of(load), {1, "Test", "start load", "", "", ""}, seen);
  }
  std::vector<MovedLoad> push(int at_min) {
    return push_line(plant.furnaces.front(), store, reader,
                     {"f1", start_us + at_min * minute, "Test", "person"}, 1);
  }
  LoadDefinition stored(std::int64_t id) {
    return read_stored_definition(reader.load(id).value().definition_json);
  }
  std::string zone(std::int64_t id) { return stored(id).last_place().chamber; }
  int position(std::int64_t id, int at_min) {
    return line_position(stored(id), reader, start_us + at_min * minute).value();
  }
};

}  // namespace

TEST_CASE("a tray goes through the zones by its position and leaves at the end") {
  Line line;
  const auto id = line.put(line.tray());
  CHECK(line.push(10).empty());
  CHECK(line.position(id, 5) == 1);
  CHECK(line.position(id, 10) == 2);
  CHECK(line.push(20).at(0).to == "boost");
  for (const int at : {30, 40}) CHECK(line.push(at).empty());
  CHECK(line.push(50).at(0).to == "quench");
  CHECK_FALSE(line.push(60).at(0).to.has_value());
  CHECK(line.reader.load(id)->ended_us == line.start_us + 60 * minute);
}

TEST_CASE("a tray that came into a later zone goes on from there, not back to the first") {
  Line line;
  const auto id = line.put(line.tray(R"("chamber":"boost",)"));
  CHECK(line.position(id, 5) == 3);
  for (const int at : {10, 20}) CHECK(line.push(at).empty());
  CHECK(line.position(id, 20) == 5);
  CHECK(line.push(30).at(0).to == "quench");
}

TEST_CASE("a tray put into the next zone by hand goes on from that zone's first place") {
  Line line;
  LoadDefinition load = line.tray();
  load.path.push_back({line.start_us + 5 * minute, "f1", "boost"});
  const auto id = line.put(load);
  CHECK(line.position(id, 2) == 1);
  CHECK(line.push(10).empty());
  CHECK(line.zone(id) == "boost");
  CHECK(line.position(id, 10) == 4);
}

TEST_CASE("a tray entered late is where the pushes since have carried it") {
  Line line;
  for (const int at : {10, 20, 30}) line.push(at);
  LoadDefinition load = line.tray();
  CHECK(follow_line(load, line.reader, line.start_us + 60 * minute));
  REQUIRE(load.path.size() == 2);
  CHECK(load.path[1] == PathStep{line.start_us + 20 * minute, "f1", "boost"});
  LoadDefinition later = line.tray(R"("chamber":"boost",)");
  CHECK(follow_line(later, line.reader, line.start_us + 60 * minute));
  CHECK(later.last_place() == PathStep{line.start_us + 30 * minute, "f1", "quench"});
}

TEST_CASE("a tray is not put on a line that was pushed since it was worked out where it is") {
  Line line;
  const LoadDefinition load = line.tray();
  const auto seen = line_seen("f1", line.reader);
  line.push(10);
  CHECK_THROWS_AS(line.put(load, seen), storage::StorageError);
  CHECK(line.reader.open_loads().empty());
  CHECK(line.put(load, line_seen("f1", line.reader)) == 1);
}

TEST_CASE("a push is refused where a load came onto the line that it did not see") {
  Line line;
  auto seen = line_seen("f1", line.reader);
  seen.loads = line.reader.loads_on("f1");
  const auto id = line.put(line.tray());
  const storage::PushRow push{"f1", line.start_us + minute, "Test", "person"};
  CHECK_THROWS_AS(line.store.revise_loads({}, {}, push, seen), storage::StorageError);
  CHECK_FALSE(line.reader.last_push("f1", "").has_value());
  seen.loads = line.reader.loads_on("f1");
  REQUIRE(seen.loads->size() == 1);
  CHECK(seen.loads->front() == storage::LoadOn{id, 1});
  line.store.revise_loads({}, {}, push, seen);
  CHECK(line.reader.last_push("f1", "").has_value());
}

TEST_CASE("a zone that the plant file has renamed since keeps its name in the load") {
  Line line;
  const auto id = line.put(line.tray());
  line.plant.furnaces.front().chambers[1].id = "renamed";
  line.push(10);
  CHECK(line.push(20).at(0).to == "boost");
  CHECK(line.zone(id) == "boost");
}

TEST_CASE("a load that cannot be read does not hold up the others") {
  Line line;
  const LoadDefinition whole = line.tray();
  storage::LoadRow broken = row_of(whole);
  broken.definition_json = "{}";
  line.store.create_load(broken, stays_of(whole), {1, "Test", "start load", "", "", ""});
  const auto id = line.put(line.tray());
  line.push(10);
  CHECK(line.push(20).size() == 1);
  CHECK(line.zone(id) == "boost");
}

TEST_CASE("a signal that rises right after a person's entry is the same push") {
  const storage::PushRow entered{"line", 1'000'000'000, "Line shift", "person"};
  CHECK(is_echo(entered, 1'100'000'000));
  CHECK_FALSE(is_echo(entered, 1'200'000'000));
  const storage::PushRow signalled{"line", 1'000'000'000, "Push signal", "signal"};
  CHECK_FALSE(is_echo(signalled, 1'100'000'000));
  CHECK_FALSE(is_echo(std::nullopt, 1'100'000'000));
}
