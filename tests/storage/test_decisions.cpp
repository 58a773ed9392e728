// What people decide about stored things: library versions, choices between conflicting values, masks. The
// rules are the project's own: nothing past is changed, and two who save at once do not overwrite each other.
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
  std::int64_t channel = store.register_channel("pit-2", "temperature");

  std::int64_t save(const std::string& key, const std::string& json, std::int64_t expected,
                    bool retired = false) {
    return store.save_library({"part", key, 0, 1'000, "Supervisor", key, json, retired}, expected,
                              by("Supervisor", "save part"));
  }
  std::vector<double> accepted() {
    std::vector<double> values;
    for (const Reading& reading : reader.accepted(channel, 0, 1'000)) values.push_back(reading.value);
    return values;
  }
  void choose(std::int64_t time_us, std::optional<double> value) {
    store.choose({{channel, time_us, value, 5'000, "Supervisor"}}, by("Supervisor", "choose readings"));
  }
};

}  // namespace

TEST_CASE("library entries have versions; the newest is offered, the old ones stay") {
  Bench bench;
  CHECK(bench.save("pinion", "{\"a\":1}", 0) == 1);
  CHECK(bench.save("pinion", "{\"a\":2}", 1) == 2);
  CHECK(bench.save("axle", "{}", 0) == 1);
  const auto offered = bench.reader.library("part");
  REQUIRE(offered.size() == 2);
  CHECK(offered[0].key == "axle");
  CHECK(offered[1].json == "{\"a\":2}");
  CHECK(bench.reader.library_item("part", "pinion", 1)->json == "{\"a\":1}");
  CHECK(bench.reader.library_versions("part", "pinion").size() == 2);
  CHECK(bench.reader.library("recipe").empty());
  Outside outside(bench.folder.database());
  CHECK(contains(outside.failure("UPDATE library SET json = ''"), "never changed"));
  CHECK(contains(outside.failure("DELETE FROM library"), "never deleted"));
}

TEST_CASE("two people who save from the same version: the second is told") {
  Bench bench;
  bench.save("pinion", "{}", 0);
  bench.save("pinion", "{\"first\":1}", 1);
  std::string text;
  CHECK(fault_of([&] { bench.save("pinion", "{\"second\":1}", 1); }, &text) == StorageFault::misuse);
  CHECK(contains(text, "version 2"));
  CHECK(fault_of([&] { bench.save("pinion", "{}", 0); }) == StorageFault::misuse);
  CHECK(fault_of([&] { bench.save("axle", "{}", 3); }) == StorageFault::misuse);
  CHECK(bench.reader.library("part").at(0).json == "{\"first\":1}");
}

TEST_CASE("a retired entry is offered no more, and may come back") {
  Bench bench;
  bench.save("pinion", "{}", 0);
  bench.save("pinion", "{}", 1, true);
  CHECK(bench.reader.library("part").empty());
  CHECK(bench.reader.library_item("part", "pinion")->retired);
  bench.save("pinion", "{}", 2);
  CHECK(bench.reader.library("part").size() == 1);
}

TEST_CASE("of two values for one time none counts until a person chooses") {
  Bench bench;
  bench.store.append({{bench.channel, 100, 900}, {bench.channel, 200, 901}, {bench.channel, 200, 955}}, {});
  CHECK(bench.accepted() == std::vector<double>{900});
  const auto open = bench.reader.conflicts(bench.channel, 0, 1'000, 10);
  REQUIRE(open.size() == 1);
  CHECK(open[0].values == std::vector<double>{901, 955});
  CHECK_FALSE(open[0].choice.has_value());
  CHECK(bench.reader.newest(bench.channel, 1'000)->time_us == 100);

  bench.store.take_changes();
  bench.choose(200, 901);
  CHECK(bench.accepted() == std::vector<double>{900, 901});
  CHECK(bench.reader.newest(bench.channel, 1'000)->value == 901);
  CHECK(bench.reader.counts(bench.channel).conflicts == 1);
  CHECK(bench.reader.counts(bench.channel).chosen == 1);
  const auto changes = bench.store.take_changes();
  REQUIRE(changes.size() == 1);
  CHECK(changes[0].from_us == 200);

  // Minds change; the audit trail keeps both.
  bench.choose(200, std::nullopt);
  CHECK(bench.accepted() == std::vector<double>{900});
  CHECK(bench.reader.conflicts(bench.channel, 0, 1'000, 10).at(0).choice.has_value());
  CHECK(bench.reader.audit("", 10).size() == 2);
}

TEST_CASE("only what is there can be chosen, and only where there are two") {
  Bench bench;
  bench.store.append({{bench.channel, 100, 900}, {bench.channel, 200, 901}, {bench.channel, 200, 955}}, {});
  CHECK(fault_of([&] { bench.choose(200, 902); }) == StorageFault::misuse);
  CHECK(fault_of([&] { bench.choose(100, 900); }) == StorageFault::misuse);
  CHECK(fault_of([&] { bench.choose(300, std::nullopt); }) == StorageFault::misuse);
  CHECK(bench.reader.audit("", 10).empty());
}

TEST_CASE("a marked stretch is found by the times it touches, can be withdrawn, and wakes the followers") {
  Bench bench;
  bench.store.take_changes();
  const auto id = bench.store.add_mask({0, bench.channel, 100, 200, 1'000, "Night shift", "burn-off", false},
                                       by("Night shift", "mark burn-off"));
  CHECK(bench.store.take_changes().at(0).to_us == 200);
  CHECK(bench.reader.masks(bench.channel, 150, 160).at(0).reason == "burn-off");
  CHECK(bench.reader.masks(bench.channel, 201, 300).empty());
  bench.store.withdraw_mask(id, by("Supervisor", "withdraw mark"));
  CHECK(bench.store.take_changes().at(0).from_us == 100);
  CHECK(bench.reader.masks(bench.channel, 150, 160).at(0).withdrawn);
  CHECK(fault_of([&] { bench.store.withdraw_mask(id, by("Supervisor", "withdraw mark")); }) ==
        StorageFault::misuse);
}

TEST_CASE("conflicts are found newest first, all there are and no more than asked for") {
  Bench bench;
  CHECK(bench.reader.conflicts(bench.channel, 0, 1'000, 10).empty());
  bench.store.append({{bench.channel, 100, 900}, {bench.channel, 200, 901}, {bench.channel, 300, 902}}, {});
  CHECK(bench.reader.conflicts(bench.channel, 0, 1'000, 10).empty());
  bench.store.append({{bench.channel, 100, 910}, {bench.channel, 300, 912}}, {});
  const auto all = bench.reader.conflicts(bench.channel, 0, 1'000, 10);
  REQUIRE(all.size() == 2);
  CHECK(all[0].time_us == 300);
  CHECK(all[1].values == std::vector<double>{900, 910});
  CHECK(bench.reader.conflicts(bench.channel, 0, 1'000, 1).at(0).time_us == 300);
  CHECK(bench.reader.conflicts(bench.channel, 0, 200, 10).at(0).time_us == 100);
}
