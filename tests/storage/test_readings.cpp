// Readings: the accepted set depends on what came, never on when or in which order (the project's second
// invariant), and nothing that was refused goes unseen.
#include <doctest/doctest.h>

#include <algorithm>
#include <atomic>
#include <cmath>
#include <limits>
#include <map>
#include <random>
#include <set>

#include "storage/store.h"
#include "storage/support.h"

using namespace hearthfront::storage;
using namespace hearthfront::storage::test;

namespace {

struct Bench {
  Folder folder;
  Store store{at(folder.database())};
  std::int64_t channel = store.register_channel("pit-2", "temperature");
  Reader reader{folder.database()};
};

using Pair = std::pair<std::int64_t, double>;
std::vector<Pair> pairs(const std::vector<Reading>& readings) {
  std::vector<Pair> found;
  for (const Reading& reading : readings) found.emplace_back(reading.time_us, reading.value);
  return found;
}

RefusedReading refusal(const std::string& channel, const std::string& reason = "unknown channel") {
  return {.received_us = 5,
          .furnace = "pit-2",
          .channel = channel,
          .time_text = "noon",
          .value_text = "9e",
          .reason = reason};
}

constexpr std::int64_t end_of_time = std::numeric_limits<std::int64_t>::max();

}  // namespace

TEST_CASE("a reading sent twice is one row, in one batch or in two") {
  Bench bench;
  const Reading first{bench.channel, 1'000, 928.5}, second{bench.channel, 2'000, 929};
  CHECK(bench.store.append({first, first, second}, {}) ==
        std::vector{Taken::stored, Taken::duplicate, Taken::stored});
  CHECK(bench.store.append({second, first}, {}) == std::vector{Taken::duplicate, Taken::duplicate});
  CHECK(pairs(bench.reader.accepted(bench.channel, 0, 9'000)) ==
        std::vector<Pair>{{1'000, 928.5}, {2'000, 929}});
}

TEST_CASE("two values for one time are both kept and neither is accepted") {
  Bench bench;
  const auto channel = bench.channel;
  CHECK(
      bench.store.append({{channel, 1'000, 900}, {channel, 2'000, 901}, {channel, 3'000, 902}}, {}).size() ==
      3);
  CHECK(bench.store.append({{channel, 2'000, 950}}, {}) == std::vector{Taken::conflict});
  CHECK(bench.store.append({{channel, 2'000, 960}}, {}) == std::vector{Taken::conflict});
  CHECK(bench.store.append({{channel, 2'000, 950}}, {}) == std::vector{Taken::duplicate});
  CHECK(pairs(bench.reader.accepted(channel, 0, 9'000)) == std::vector<Pair>{{1'000, 900}, {3'000, 902}});
  CHECK(bench.reader.counts(channel).stored == 5);
  CHECK(bench.reader.counts(channel).conflicts == 1);
  CHECK(Outside(bench.folder.database()).number("SELECT count(*) FROM reading WHERE time_us = 2000") == 3);
}

TEST_CASE("the newest accepted reading passes over times in conflict") {
  Bench bench;
  const auto channel = bench.channel;
  CHECK_FALSE(bench.reader.newest(channel, end_of_time).has_value());
  CHECK_FALSE(bench.reader.counts(channel).last.has_value());
  bench.store.append(
      {{channel, 1'000, 900}, {channel, 2'000, 901}, {channel, 2'000, 950}, {channel, 3'000, 902}}, {});
  CHECK(bench.reader.newest(channel, 3'000)->value == 902);
  CHECK(bench.reader.newest(channel, 2'999)->time_us == 1'000);
  CHECK(bench.reader.newest(channel, 1'000)->time_us == 1'000);
  CHECK_FALSE(bench.reader.newest(channel, 999).has_value());
  CHECK(bench.reader.counts(channel).last->time_us == 3'000);
  bench.store.append({{channel, 3'000, 903}}, {});
  CHECK(bench.reader.counts(channel).last->time_us == 1'000);
  const auto only_conflict = bench.store.register_channel("pit-2", "oxygen probe");
  bench.store.append({{only_conflict, 1, 1}, {only_conflict, 1, 2}}, {});
  CHECK_FALSE(bench.reader.newest(only_conflict, end_of_time).has_value());
}

TEST_CASE("minus zero is zero, not a second value") {
  Bench bench;
  CHECK(bench.store.append({{bench.channel, 1, -0.0}, {bench.channel, 1, 0.0}}, {}) ==
        std::vector{Taken::stored, Taken::duplicate});
  const auto stored = bench.reader.accepted(bench.channel, 1, 1);
  REQUIRE(stored.size() == 1);
  CHECK_FALSE(std::signbit(stored[0].value));
}

TEST_CASE("values and times come back bit for bit, also the outermost ones") {
  Bench bench;
  const std::vector<Reading> sent{
      {bench.channel, std::numeric_limits<std::int64_t>::min(), std::numeric_limits<double>::lowest()},
      {bench.channel, -1, std::numeric_limits<double>::denorm_min()},
      {bench.channel, 0, 0.1},
      {bench.channel, 1, 9'007'199'254'740'993.0},
      {bench.channel, end_of_time, std::numeric_limits<double>::max()}};
  bench.store.append(sent, {});
  CHECK(pairs(bench.reader.accepted(bench.channel, std::numeric_limits<std::int64_t>::min(), end_of_time)) ==
        pairs(sent));
  CHECK(bench.store.append(sent, {}) == std::vector(sent.size(), Taken::duplicate));
}

TEST_CASE("a batch with a value that is no number, or an unknown channel, is refused whole") {
  Bench bench;
  for (const double value : {std::nan(""), std::numeric_limits<double>::infinity()}) {
    CHECK(fault_of([&] {
            bench.store.append({{bench.channel, 1, 900}, {bench.channel, 2, value}}, {});
          }) == StorageFault::misuse);
  }
  std::string text;
  CHECK(fault_of(
            [&] {
              bench.store.append({{bench.channel, 1, 900}, {4711, 2, 900}}, {});
            },
            &text) == StorageFault::misuse);
  CHECK(contains(text, "4711"));
  CHECK(bench.reader.accepted(bench.channel, 0, 9).empty());
  CHECK(bench.store.append({}, {}).empty());
}

TEST_CASE("channels keep their number, across threads of names and restarts") {
  const Folder folder;
  std::int64_t temperature = 0, probe = 0;
  {
    Store store(at(folder.database()));
    temperature = store.register_channel("pit-2", "temperature");
    probe = store.register_channel("pit-2", "oxygen probe");
    CHECK(store.register_channel("pit-3", "temperature") != temperature);
    CHECK(probe != temperature);
    CHECK(fault_of([&] { store.register_channel("pit-2", ""); }) == StorageFault::misuse);
    CHECK(fault_of([&] { store.register_channel(std::string(201, 'p'), "x"); }) == StorageFault::misuse);
  }
  Store store(at(folder.database()));
  CHECK(store.register_channel("pit-2", "oxygen probe") == probe);
  CHECK(store.register_channel("pit-2", "temperature") == temperature);
}

// Model: times seen with exactly one value are accepted, whatever the order, batching or repetition.
TEST_CASE("any order, batching, repetition and restart gives the same accepted set and the same counts") {
  for (const unsigned seed : {1U, 2U, 3U, 4U, 5U, 6U}) {
    CAPTURE(seed);
    std::mt19937 random(seed);
    const auto below = [&](std::size_t limit) { return static_cast<std::size_t>(random() % limit); };
    std::map<std::int64_t, std::set<double>> model;
    std::vector<Pair> sent;
    for (int i = 0; i < 400; ++i) {
      const Pair reading{static_cast<std::int64_t>(below(150)), 900.0 + static_cast<double>(below(3))};
      model[reading.first].insert(reading.second);
      sent.push_back(reading);
      if (below(3) == 0) sent.push_back(reading);
    }
    std::shuffle(sent.begin(), sent.end(), random);

    const Folder folder;
    auto store = std::make_unique<Store>(at(folder.database()));
    std::int64_t channel = store->register_channel("pit-2", "temperature");
    std::int64_t stored = 0;
    for (std::size_t next = 0; next < sent.size();) {
      if (below(20) == 0) {
        store.reset();
        store = std::make_unique<Store>(at(folder.database()));
        channel = store->register_channel("pit-2", "temperature");
      }
      std::vector<Reading> batch;
      for (std::size_t size = 1 + below(40); size > 0 && next < sent.size(); --size, ++next) {
        batch.push_back({channel, sent[next].first, sent[next].second});
      }
      for (const Taken taken : store->append(batch, {})) stored += taken == Taken::duplicate ? 0 : 1;
    }

    std::vector<Pair> expected;
    std::int64_t rows = 0, conflicts = 0;
    for (const auto& [time, values] : model) {
      rows += static_cast<std::int64_t>(values.size());
      if (values.size() == 1) {
        expected.emplace_back(time, *values.begin());
      } else {
        ++conflicts;
      }
    }
    Reader reader(folder.database());
    CHECK(pairs(reader.accepted(channel, 0, 1'000)) == expected);
    CHECK(stored == rows);
    CHECK(reader.counts(channel).stored == rows);
    CHECK(reader.counts(channel).conflicts == conflicts);
    CHECK(Outside(folder.database()).number("SELECT count(*) FROM reading") == rows);
  }
}

TEST_CASE("changed spans join what is new, leave out duplicates, and are handed over once") {
  Bench bench;
  const auto probe = bench.store.register_channel("pit-2", "oxygen probe");
  CHECK(bench.store.take_changes().empty());
  bench.store.append({{bench.channel, 500, 900}, {probe, 7, 1'120}}, {});
  bench.store.append({{bench.channel, 300, 900}, {bench.channel, 400, 900}}, {});
  auto spans = bench.store.take_changes();
  REQUIRE(spans.size() == 2);
  CHECK(spans[0].channel == bench.channel);
  CHECK(spans[0].from_us == 300);
  CHECK(spans[0].to_us == 500);
  CHECK(spans[1].from_us == 7);
  CHECK(bench.store.take_changes().empty());

  bench.store.append({{bench.channel, 300, 900}}, {refusal("x")});
  CHECK(bench.store.take_changes().empty());
  // A late contradiction takes an accepted reading away: that is a change at its time.
  bench.store.append({{bench.channel, 400, 950}}, {});
  spans = bench.store.take_changes();
  REQUIRE(spans.size() == 1);
  CHECK(spans[0].from_us == 400);
  CHECK(spans[0].to_us == 400);
}

TEST_CASE("the change call-back runs once for each commit with new rows, and finds the span there") {
  Bench bench;
  std::atomic<int> calls = 0, spans = 0;
  bench.store.on_change([&] {
    spans += static_cast<int>(bench.store.take_changes().size());
    ++calls;
  });
  bench.store.append(series(bench.channel, 1, 5), {});
  CHECK(eventually([&] { return calls == 1; }));
  bench.store.append(series(bench.channel, 1, 5), {refusal("x")});
  bench.store.set_meta("plant", "demo");
  bench.store.append(series(bench.channel, 9, 1), {});
  bench.store.close();
  CHECK(calls == 2);
  CHECK(spans == 2);
}

TEST_CASE("refused readings are kept with their reason, newest first, cut to 200 bytes between characters") {
  Bench bench;
  auto long_one = refusal("temperature", "impossible value");
  long_one.value_text = std::string(199, '9') + "\xC2\xB0" + "C";  // the degree sign would be cut in two
  bench.store.append(series(bench.channel, 1, 1), {refusal("tempreature"), long_one});
  const auto rows = bench.reader.refused("pit-2", 10);
  REQUIRE(rows.size() == 2);
  CHECK(rows[0].reason == "impossible value");
  CHECK(rows[0].value_text == std::string(199, '9'));
  CHECK(rows[1].channel == "tempreature");
  CHECK(rows[1].time_text == "noon");
  CHECK(rows[1].received_us == 5);
  CHECK(bench.reader.refused("", 1).size() == 1);
  CHECK(bench.reader.refused("pit-9", 10).empty());
  CHECK(bench.reader.counts(bench.channel).refused ==
        std::map<std::string, std::int64_t>{{"impossible value", 1}});
  CHECK(fault_of([&] { bench.reader.refused("", 0); }) == StorageFault::misuse);
}

TEST_CASE("refusals are counted for ever, their rows make room after 20 000") {
  Bench bench;
  for (int batch = 0; batch < 5; ++batch) {
    std::vector<RefusedReading> refused(4'999, refusal("temperature", "future time"));
    auto last = refusal("temperature", "future time");
    last.received_us = batch;
    refused.push_back(last);
    bench.store.append({}, refused);
  }
  CHECK(bench.reader.counts(bench.channel).refused.at("future time") == 25'000);
  const auto kept = bench.reader.refused("", 1'000'000);
  CHECK(kept.size() == 20'000);
  CHECK(kept.front().received_us == 4);
  CHECK(std::none_of(kept.begin(), kept.end(), [](const auto& row) { return row.received_us == 0; }));
}

TEST_CASE("a flood of invented names is counted together, a registered channel still by itself") {
  Bench bench;
  std::vector<RefusedReading> flood;
  for (int i = 0; i < 2'500; ++i) flood.push_back(refusal("invented-" + std::to_string(i)));
  bench.store.append({}, flood);
  bench.store.append({}, {refusal("temperature", "future time")});
  const auto counts = bench.reader.refused_counts("");
  std::int64_t together = 0, all = 0;
  for (const auto& row : counts) {
    all += row.count;
    if (row.channel == "(other)") together += row.count;
  }
  CHECK(counts.size() == 2'002);
  CHECK(together == 500);
  CHECK(all == 2'501);
  CHECK(bench.reader.counts(bench.channel).refused.at("future time") == 1);
}
