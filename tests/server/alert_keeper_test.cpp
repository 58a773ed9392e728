// The keeper with a real store: what is stored survives it, state and messages come together, and what people
// do is durable. The engine's part is played by a board of hand-made views.
#include <doctest/doctest.h>
#include <unistd.h>

#include <atomic>
#include <filesystem>
#include <thread>

#include "alert_support.h"
#include "server/alerts/alert_json.h"
#include "server/alerts/alert_keeper.h"

using namespace hearthfront::server;
using namespace hearthfront::server::test;
namespace storage = hearthfront::storage;

namespace {

class SetClock final : public Clock {
 public:
  std::int64_t now_us() const override { return now; }
  double speed() const override { return 1; }
  std::atomic<std::int64_t> now{0};
};

bool within_seconds(int seconds, const std::function<bool()>& condition) {
  for (int i = 0; i < seconds * 100; ++i) {
    if (condition()) return true;
    std::this_thread::sleep_for(std::chrono::milliseconds(10));
  }
  return condition();
}

struct Daemon {
  std::filesystem::path folder =
      std::filesystem::temp_directory_path() / ("hf-alerts-" + std::to_string(getpid()));
  Settings settings;
  Plant plant = small_plant();
  SetClock clock;
  Board board;
  std::unique_ptr<storage::Store> store;
  std::unique_ptr<AlertKeeper> keeper;
  std::atomic<int> told{0};

  Daemon() {
    std::filesystem::create_directories(folder);
    settings.alerts.least_free_mb = 1;
    open();
    // The load of the hand-made views, which has the number 7.
    for (int i = 1; i <= 7; ++i) {
      storage::LoadRow row;
      row.name = std::to_string(i);
      row.furnace = "f1";
      row.chamber = "main";
      row.person = "Test";
      row.started_us = i * 1'000'000;
      if (i < 7) row.ended_us = row.started_us + 500'000;
      row.definition_json = "{}";
      store->create_load(row, {1, "Test", "start load", "", "", ""});
    }
    begin();
  }
  ~Daemon() {
    keeper.reset();
    store.reset();
    std::filesystem::remove_all(folder);
  }
  void open() {
    storage::StoreOptions options;
    options.path = folder / "test.db";
    store = std::make_unique<storage::Store>(options);
  }
  void begin() {
    keeper = std::make_unique<AlertKeeper>(
        KeeperParts{settings, plant, clock, *store, board,
                    [](const storage::AlertRow&, std::string_view) {
                      return std::vector<Route>{{"phone", {}}};
                    },
                    [this](const std::string& furnace, const std::string& channel) {
                      return store->register_channel(furnace, channel);
                    },
                    [] { return true; }, [this](std::uint64_t, bool) { ++told; }});
    keeper->start();
  }
  // The daemon ends and starts again on what is stored.
  void restart() {
    keeper.reset();
    store.reset();
    open();
    begin();
  }
  void publish(const HandMade& load) {
    board.publish(std::make_shared<LoadView>(load.view));
    keeper->wake();
  }
  bool shows(std::size_t count) {
    return within_seconds(10, [&] { return keeper->list()->active.size() == count; });
  }
};

HandMade silent_load() {
  HandMade load;
  load.view.condition = Condition::stale;
  return load;
}

}  // namespace

TEST_CASE(
    "a silent furnace: raised with its message in one commit, the same after a restart, past when it "
    "speaks") {
  Daemon daemon;
  HandMade load = silent_load();
  daemon.clock.now = *load.view.data_us + 20 * minute_us;
  daemon.publish(load);
  REQUIRE(daemon.shows(1));
  const storage::AlertRow raised = daemon.keeper->list()->active[0];
  CHECK(raised.kind == "no reading");
  CHECK(raised.since_us == *load.view.data_us);
  storage::Reader reader(daemon.store->path());
  REQUIRE(reader.deliveries(raised.id).size() == 1);
  const Json payload = Json::parse(reader.deliveries(raised.id)[0].payload_json);
  CHECK(payload["event"] == "raised");
  CHECK(payload["key"] == reader.deliveries(raised.id)[0].key);
  CHECK(payload["alert"]["id"] == raised.id);
  CHECK(payload["alert"]["furnace_name"] == "Furnace 1");
  CHECK(payload["plant"] == "Test plant");
  CHECK(daemon.told >= 1);

  daemon.restart();
  REQUIRE(daemon.shows(1));
  CHECK(daemon.keeper->list()->active[0].id == raised.id);
  CHECK(daemon.keeper->list()->active[0].since_us == raised.since_us);
  CHECK(storage::Reader(daemon.store->path()).deliveries(raised.id).size() == 1);

  load.view.condition = Condition::live;
  daemon.publish(load);
  // The clear hold of silence is a minute of this clock; its steps are an alert of their own.
  CHECK(within_seconds(10, [&] {
    daemon.clock.now += minute_us / 60;
    const auto list = daemon.keeper->list();
    for (const storage::AlertRow& row : list->active)
      if (row.id == raised.id) return false;
    return true;
  }));
  CHECK(storage::Reader(daemon.store->path()).alert(raised.id)->state == storage::AlertState::resting);
}

TEST_CASE("two people acknowledge at once: one wins, the other is told; both see the same alert") {
  Daemon daemon;
  const HandMade load = silent_load();
  daemon.clock.now = *load.view.data_us + 20 * minute_us;
  daemon.publish(load);
  REQUIRE(daemon.shows(1));
  const std::int64_t id = daemon.keeper->list()->active[0].id;
  std::atomic<int> won{0}, refused{0};
  const auto press = [&](const std::string& person) {
    try {
      daemon.keeper->acknowledge(id, person, "");
      ++won;
    } catch (const AlertRefusal&) {
      ++refused;
    }
  };
  std::thread first([&] { press("Night shift"); });
  std::thread second([&] { press("Supervisor"); });
  first.join();
  second.join();
  CHECK(won == 1);
  CHECK(refused == 1);
  storage::Reader reader(daemon.store->path());
  const auto stored = reader.alert(id);
  CHECK(stored->acknowledged_by == daemon.keeper->list()->active[0].acknowledged_by);
  CHECK(reader.audit("alert " + std::to_string(id), 10).size() == 1);
  CHECK_THROWS_AS(daemon.keeper->add_note(99, "A", "text"), UnknownAlert);
}

TEST_CASE("an alert of a load that ended is past at once") {
  Daemon daemon;
  HandMade load;
  load.view.segment.minutes_left = 5;
  daemon.clock.now = *load.view.data_us;
  daemon.publish(load);
  REQUIRE(daemon.shows(1));
  CHECK(daemon.keeper->list()->active[0].kind == "segment due");
  CHECK(daemon.keeper->list()->active[0].load == 7);
  daemon.board.remove(7);  // not on the board and not ended: nothing is known
  std::this_thread::sleep_for(std::chrono::milliseconds(1500));
  CHECK(daemon.keeper->list()->active.size() == 1);
  daemon.store->revise_load(7, 1, "", *load.view.data_us, {2, "Test", "end load", "", "", ""});
  CHECK(daemon.shows(0));
}

TEST_CASE("the daemon's clock that jumps against a steady one is told") {
  Daemon daemon;
  daemon.clock.now = 1'000 * minute_us;
  std::this_thread::sleep_for(std::chrono::milliseconds(1300));
  daemon.clock.now += 2 * minute_us;
  CHECK(within_seconds(5, [&] {
    const auto list = daemon.keeper->list();
    return !list->active.empty() && list->active[0].kind == "clock";
  }));
}
