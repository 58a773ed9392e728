// The engine against a real store: what leaves the board, what becomes of the results of ended loads, and
// what counts as the newest reading. The rules are the project's own (DEVELOPERS.md, invariants).
#include <doctest/doctest.h>

#include <chrono>
#include <functional>
#include <thread>

#include "live_support.h"
#include "server/live/engine.h"
#include "server/live/push_line.h"
#include "store_support.h"

using namespace hearthfront::server;
using namespace hearthfront::server::test;
namespace storage = hearthfront::storage;

namespace {

constexpr std::int64_t minute = 60'000'000;

// f1 as in small_plant, and f2 like it.
Plant two_furnaces() {
  Plant plant = small_plant();
  plant.furnaces.push_back(plant.furnaces.front());
  plant.furnaces.back().id = "f2";
  return plant;
}

struct FixedClock final : Clock {
  std::int64_t now = 0;
  std::int64_t now_us() const override { return now; }
  double speed() const override { return 1.0; }
};

struct Works {
  StoreFolder folder;
  storage::Store store{folder.options()};
  storage::Reader reader{folder.options().path};
  Plant plant = two_furnaces();
  FixedClock clock;
  Board board;
  Metrics metrics;
  std::int64_t start_us = definition()->started_us;
  std::map<std::string, std::int64_t> channels;
  std::unique_ptr<Engine> engine;

  Works() {
    clock.now = start_us + 240 * minute;
    for (const Furnace& furnace : plant.furnaces)
      for (const Channel& channel : furnace.channels)
        channels[furnace.id + channel.name] = store.register_channel(furnace.id, channel.name);
    engine = std::make_unique<Engine>(
        EngineParts{plant,
                    clock,
                    store,
                    board,
                    metrics,
                    300,
                    {},
                    [this](const std::string& f, const std::string& c) { return channels.at(f + c); },
                    {}});
    engine->start();
  }

  LoadDefinition load(const std::string& extra = "") { return read_load_body(load_text(extra), plant); }
  std::int64_t create(const LoadDefinition& load) {
    const auto id = store.create_load(row_of(load), stays_of(load), {1, "Test", "start load", "", "", ""});
    engine->loads_changed();
    return id;
  }
  void revise(std::int64_t id, const LoadDefinition& load, bool cancelled = false) {
    storage::LoadRow row = row_of(load);
    row.id = id;
    row.cancelled = cancelled;
    store.revise_loads(
        {{reader.load(id)->revision, row, cancelled ? std::vector<storage::Stay>{} : stays_of(load)}},
        {{1, "Test", "correct load", "", "", ""}});
    engine->loads_changed();
  }
  void log(const std::string& channel, int at_min, double value) {
    store.append({{channels.at(channel), start_us + at_min * minute, value}}, {});
    engine->wake();
  }
  void log_all(const std::string& furnace, int from_min, int to_min) {
    for (int m = from_min; m <= to_min; m += 4) {
      log(furnace + "temperature", m, 930);
      log(furnace + "potential", m, 1.1);
    }
  }
  std::size_t results(std::int64_t id) { return reader.results(id).size(); }

  static bool eventually(const std::function<bool()>& condition) {
    for (int i = 0; i < 1000; ++i) {
      if (condition()) return true;
      std::this_thread::sleep_for(std::chrono::milliseconds(10));
    }
    return false;
  }
};

const std::string ended = R"("ended_at":"2026-03-02T09:00:00Z",)";

}  // namespace

TEST_CASE("a cancelled load leaves the board and gets no result") {
  Works works;
  LoadDefinition load = works.load();
  const auto id = works.create(load);
  REQUIRE(Works::eventually([&] { return works.board.load(id) != nullptr; }));
  load.ended_us = works.start_us + 200 * minute;
  works.revise(id, load, true);
  CHECK(Works::eventually([&] { return works.board.load(id) == nullptr; }));
  CHECK(works.results(id) == 0);
}

TEST_CASE("each revision of an ended load has a result, also one that changes nothing in it") {
  Works works;
  LoadDefinition load = works.load(ended);
  works.log_all("f1", 0, 60);
  const auto id = works.create(load);
  REQUIRE(Works::eventually([&] { return works.results(id) == 1; }));
  load.person = "Somebody else";
  works.revise(id, load);
  CHECK(Works::eventually([&] { return works.reader.ended_without_result().empty(); }));
  CHECK(works.reader.result(id)->revision == 2);
  CHECK(works.results(id) == 2);
}

TEST_CASE("a late reading just before a load came, or after it left a furnace, makes a new result") {
  Works works;
  const auto id = works.create(works.load(
      ended +
      R"("path":[{"from":"2026-03-02T06:00:00Z","furnace":"f1"},{"from":"2026-03-02T07:00:00Z","furnace":"f2"}],)"));
  works.log_all("f1", 2, 58);
  works.log_all("f2", 62, 180);
  // Every change is taken before the counting begins.
  std::size_t before = 0;
  REQUIRE(Works::eventually([&] {
    const auto rounds = works.engine->rounds();
    if (!Works::eventually([&] { return works.engine->rounds() >= rounds + 2; })) return false;
    return std::exchange(before, works.results(id)) == works.results(id) && before > 0;
  }));
  works.log("f1potential", -1, 0.9);
  CHECK(Works::eventually([&] { return works.results(id) == before + 1; }));
  works.log("f1potential", 61, 0.9);
  CHECK(Works::eventually([&] { return works.results(id) == before + 2; }));
  works.log("f2potential", 59, 0.9);
  CHECK(Works::eventually([&] { return works.results(id) == before + 3; }));
}

TEST_CASE("a late mark or choice in an ended load makes a new result, and is no newer reading") {
  Works works;
  const auto id = works.create(works.load(ended));
  works.log_all("f1", 0, 176);
  works.log("f1potential", 100, 0.4);  // conflicts with 1.1
  const auto newest = works.start_us + 176 * minute;
  REQUIRE(Works::eventually([&] { return works.board.newest_reading("f1") == newest; }));
  REQUIRE(Works::eventually([&] { return works.results(id) > 0; }));
  const auto rounds = works.engine->rounds();
  REQUIRE(Works::eventually([&] { return works.engine->rounds() >= rounds + 2; }));
  const auto before = works.results(id);
  const std::int64_t potential = works.channels.at("f1potential");
  works.store.choose({{potential, works.start_us + 100 * minute, 0.4, 1, "Test"}},
                     {1, "Test", "choose", "", "", ""});
  CHECK(Works::eventually([&] { return works.results(id) == before + 1; }));
  works.store.add_mask({0, potential, works.start_us + 150 * minute, works.start_us + 230 * minute, 1, "Test",
                        "burn-off", false},
                       {1, "Test", "mark", "", "", ""});
  CHECK(Works::eventually([&] { return works.results(id) == before + 2; }));
  CHECK(works.board.newest_reading("f1") == newest);
}

TEST_CASE(
    "a late reading that was committed just before the process died still changes the ended load's result") {
  Works works;
  const auto id = works.create(works.load(ended));
  works.log_all("f1", 0, 176);
  REQUIRE(Works::eventually([&] { return works.results(id) > 0; }));
  works.engine->stop();
  const std::string before = works.reader.result(id)->result_json;
  // Committed, and then nobody is left who would remember it.
  works.store.append({{works.channels.at("f1potential"), works.start_us + 61 * minute, 0.2}}, {});
  works.store.take_changes();
  Engine again({works.plant,
                works.clock,
                works.store,
                works.board,
                works.metrics,
                300,
                {},
                [&](const std::string& f, const std::string& c) { return works.channels.at(f + c); },
                {}});
  again.start();
  CHECK(Works::eventually([&] { return works.reader.result(id)->result_json != before; }));
  again.stop();
}
