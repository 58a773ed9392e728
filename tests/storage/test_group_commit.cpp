// One writer for many callers: commits are shared, a bad job harms nobody else, the queue is bounded, and a
// close loses nothing. Where the order of events matters, the change call-back holds the writer thread.
#include <doctest/doctest.h>

#include <atomic>
#include <latch>
#include <thread>

#include "storage/connection.h"
#include "storage/store.h"
#include "storage/support.h"
#include "storage/writer.h"

using namespace hearthfront::storage;
using namespace hearthfront::storage::test;

namespace {

// Holds the writer thread after its next commit with new rows, until let go.
class Held {
 public:
  Held(Store& store, std::int64_t channel) {
    store.on_change([this] {
      if (!first_.exchange(false)) return;
      held_.count_down();
      go_.wait();
    });
    store.append({{channel, -1, 900}}, {});
    held_.wait();
  }
  void let_go() { go_.count_down(); }

 private:
  std::atomic<bool> first_ = true;
  std::latch held_{1}, go_{1};
};

struct Bench {
  explicit Bench(std::size_t queue = 50'000) {
    auto options = at(folder.database());
    options.queue_readings = queue;
    store = std::make_unique<Store>(options);
    channel = store->register_channel("pit-2", "temperature");
  }
  Folder folder;
  std::unique_ptr<Store> store;
  std::int64_t channel = 0;
};

}  // namespace

TEST_CASE("everything that waits shares one commit") {
  Bench bench;
  Held held(*bench.store, bench.channel);
  const auto before = bench.store->counters();
  std::vector<std::thread> senders;
  for (std::int64_t i = 0; i < 8; ++i) {
    senders.emplace_back([&, i] { bench.store->append(series(bench.channel, i * 10, 10), {}); });
  }
  CHECK(eventually([&] { return bench.store->counters().queued_readings == 80; }));
  held.let_go();
  for (auto& sender : senders) sender.join();
  const auto after = bench.store->counters();
  CHECK(after.commits == before.commits + 1);
  CHECK(after.readings_stored == before.readings_stored + 80);
  CHECK(after.queued_readings == 0);
}

TEST_CASE("eight senders need fewer commits than appends, and every append is whole") {
  Bench bench;
  constexpr int senders = 8, appends = 250;
  std::vector<std::thread> threads;
  for (std::int64_t i = 0; i < senders; ++i) {
    threads.emplace_back([&, i] {
      for (std::int64_t k = 0; k < appends; ++k)
        bench.store->append(series(bench.channel, (i * appends + k) * 2, 2), {});
    });
  }
  for (auto& thread : threads) thread.join();
  const auto counters = bench.store->counters();
  MESSAGE((senders * appends) << " appends in " << counters.commits << " commits");
  CHECK(counters.commits < senders * appends);
  CHECK(counters.readings_stored == 2 * senders * appends);
  CHECK(Reader(bench.folder.database()).accepted(bench.channel, 0, 1'000'000).size() ==
        2 * senders * appends);
}

TEST_CASE("a job that breaks a rule fails alone; the others of its commit are stored") {
  Bench bench;
  const auto started = bench.store->create_load(load("2291", 100), by("A", "start load"));
  Held held(*bench.store, bench.channel);
  const auto before = bench.store->counters().commits;
  std::atomic<int> good = 0, misuse = 0;
  const auto run = [&](const std::function<void()>& action) {
    return std::thread([&, action] {
      const auto fault = fault_of(action);
      if (!fault) ++good;
      if (fault == StorageFault::misuse) ++misuse;
    });
  };
  Store& store = *bench.store;
  std::vector<std::thread> threads;
  threads.push_back(run([&] { store.append(series(bench.channel, 10, 5), {}); }));
  threads.push_back(run([&] { store.create_load(load("overlaps", 200), by("B", "start load")); }));
  threads.push_back(
      run([&] { store.add_note({.id = 0, .load = 99, .at_us = 1, .person = "C", .text = "?"}); }));
  threads.push_back(run([&] { store.revise_load(started, 9, "{}", {}, by("D", "plan")); }));
  threads.push_back(
      run([&] { store.add_note({.id = 0, .load = started, .at_us = 1, .person = "E", .text = "ok"}); }));
  threads.push_back(run([&] { store.append(series(bench.channel, 20, 5), {}); }));
  CHECK(eventually([&] { return store.counters().queued_jobs == 6; }));
  held.let_go();
  for (auto& thread : threads) thread.join();
  CHECK(good == 3);
  CHECK(misuse == 3);
  CHECK(store.counters().commits == before + 1);
  Reader reader(bench.folder.database());
  CHECK(reader.accepted(bench.channel, 0, 100).size() == 10);
  CHECK(reader.notes(started).size() == 1);
  CHECK(reader.loads("", {}, 0, 10).size() == 1);
  CHECK(reader.revisions(started).size() == 1);
  CHECK(reader.audit("", 10).size() == 1);
}

TEST_CASE("what a job wrote before it broke a rule is taken back, whichever way it fails") {
  const Folder folder;
  { const Store store(at(folder.database())); }
  Writer writer(std::make_unique<Connection>(folder.database(), Connection::Role::writer), 100,
                [](Tables&) {});
  CHECK(fault_of([&] {
          writer.run(0, Writer::Kind::fallible, [](Tables& tables) {
            tables.connection.run("INSERT INTO meta VALUES('half', 'x')");
            throw StorageError(StorageFault::misuse, "changed its mind");
          });
        }) == StorageFault::misuse);
  CHECK(fault_of([&] {
          writer.run(0, Writer::Kind::fallible, [](Tables& tables) {
            tables.connection.run("INSERT INTO meta VALUES('half', 'x')");
            tables.connection.run("INSERT INTO load_note(load, at_us, person, text) VALUES(99, 0, '', '')");
          });
        }) == StorageFault::misuse);
  writer.run(0, Writer::Kind::fallible,
             [](Tables& tables) { tables.connection.run("INSERT INTO meta VALUES('whole', 'x')"); });
  writer.close();
  Outside outside(folder.database());
  CHECK(outside.number("SELECT count(*) FROM meta WHERE key = 'half'") == 0);
  CHECK(outside.number("SELECT count(*) FROM meta WHERE key = 'whole'") == 1);
}

TEST_CASE("above its bound the queue answers busy at once, and works again when it has emptied") {
  Bench bench(100);
  Held held(*bench.store, bench.channel);
  std::thread waiting([&] { bench.store->append(series(bench.channel, 0, 60), {}); });
  CHECK(eventually([&] { return bench.store->counters().queued_readings == 60; }));
  std::string text;
  CHECK(fault_of([&] { bench.store->append(series(bench.channel, 100, 41), {}); }, &text) ==
        StorageFault::busy);
  CHECK(contains(text, "60 readings wait"));
  CHECK(fault_of([&] { bench.store->append({}, std::vector<RefusedReading>(41)); }) == StorageFault::busy);
  CHECK(fault_of([&] { bench.store->append(series(bench.channel, 100, 101), {}); }) == StorageFault::misuse);
  held.let_go();
  waiting.join();
  CHECK(bench.store->append(series(bench.channel, 100, 100), {}).size() == 100);
}

TEST_CASE("more than one transaction's worth of waiting readings is stored, and one batch stays whole") {
  Bench bench;
  Held held(*bench.store, bench.channel);
  const auto before = bench.store->counters().commits;
  std::vector<std::thread> senders;
  for (const int size : {12'000, 5'000, 5'000, 5'000}) {
    senders.emplace_back([&, size, from = static_cast<std::int64_t>(senders.size()) * 100'000] {
      bench.store->append(series(bench.channel, from, size), {});
    });
  }
  CHECK(eventually([&] { return bench.store->counters().queued_readings == 27'000; }));
  held.let_go();
  for (auto& sender : senders) sender.join();
  CHECK(bench.store->counters().commits == before + 4);  // no two of these fit into 8 000
  CHECK(Reader(bench.folder.database()).counts(bench.channel).stored == 27'001);
}

TEST_CASE("writing or closing from the change call-back is refused instead of waiting for itself") {
  Bench bench;
  std::atomic<int> refused = 0;
  bench.store->on_change([&] {
    if (fault_of([&] { bench.store->append(series(bench.channel, 50, 1), {}); }) == StorageFault::misuse)
      ++refused;
    if (fault_of([&] { bench.store->set_meta("a", "b"); }) == StorageFault::misuse) ++refused;
  });
  bench.store->append(series(bench.channel, 1, 1), {});
  CHECK(eventually([&] { return refused == 2; }));
}

TEST_CASE("closing under load keeps every reading that was acknowledged") {
  for (int round = 0; round < 5; ++round) {
    Bench bench;
    constexpr int senders = 8;
    std::atomic<std::int64_t> acknowledged = 0;
    std::atomic<int> closed = 0;
    std::vector<std::thread> threads;
    for (std::int64_t i = 0; i < senders; ++i) {
      threads.emplace_back([&, i] {
        for (std::int64_t k = 0; k < 100'000; ++k) {
          const auto fault =
              fault_of([&] { bench.store->append(series(bench.channel, i * 1'000'000 + k * 3, 3), {}); });
          if (fault == StorageFault::closing) {
            ++closed;
            return;
          }
          if (!fault) acknowledged += 3;
        }
      });
    }
    CHECK(eventually([&] { return acknowledged > 300; }));
    std::thread second([&] { bench.store->close(); });
    bench.store->close();
    second.join();
    for (auto& thread : threads) thread.join();
    CHECK(closed == senders);
    Outside outside(bench.folder.database());
    CHECK(outside.number("SELECT count(*) FROM reading") == acknowledged);
    CHECK(outside.text("SELECT value FROM meta WHERE key = 'store.shutdown'") == "closed");
    CHECK(outside.sound());
  }
}

TEST_CASE("a reader sees whole batches only, and the counts that belong to them, while the writer runs") {
  Bench bench;
  std::atomic<bool> done = false;
  std::thread writer([&] {
    for (std::int64_t k = 0; k < 300; ++k) bench.store->append(series(bench.channel, k * 10, 10), {});
    done = true;
  });
  Reader reader(bench.folder.database());
  std::size_t before = 0;
  int looks = 0;
  bool whole = true, growing = true, together = true;
  while (!done) {
    const auto seen = reader.accepted(bench.channel, 0, 1'000'000).size();
    whole = whole && seen % 10 == 0;
    // Two queries of one call: they must see the same commit.
    const ChannelCounts counts = reader.counts(bench.channel);
    together = together && counts.stored == (counts.last ? counts.last->time_us + 1 : 0);
    growing = growing && seen >= before;
    before = seen;
    ++looks;
  }
  writer.join();
  CHECK(looks > 0);
  CHECK(whole);
  CHECK(growing);
  CHECK(together);
  CHECK(reader.accepted(bench.channel, 0, 1'000'000).size() == 3'000);
}

TEST_CASE("the write-ahead file starts over instead of growing with what is stored") {
  Bench bench;
  std::int64_t largest = 0;
  for (std::int64_t batch = 0; batch < 60; ++batch) {
    bench.store->append(series(bench.channel, batch * 8'000, 8'000), {});
    largest = std::max(largest, bench.store->counters().wal_bytes);
  }
  CHECK(largest > 1'000'000);
  CHECK(largest < 8'000'000);  // about 4 MB, a checkpoint comes after the commit that reaches it
  CHECK(bench.store->counters().checkpoint_failures == 0);
  CHECK(std::stoll(Outside(bench.folder.database()).text("SELECT count(*) FROM reading")) == 480'000);
  bench.store->close();
  CHECK(bench.store->counters().wal_bytes == 0);
}

TEST_CASE("a read that is held for long makes the write-ahead file grow, and its end lets it shrink") {
  Bench bench;
  const auto id = bench.store->create_load(load("2291", 100), by("A", "start load"));
  const std::string megabyte(1'000'000, 'x');
  const auto write_megabytes = [&](int count) {
    for (std::int64_t i = 0; i < count; ++i)
      bench.store->add_note({.id = 0, .load = id, .at_us = i, .person = "A", .text = megabyte});
  };
  Outside holder(bench.folder.database());
  REQUIRE(holder.failure("BEGIN") == "");
  CHECK(holder.number("SELECT count(*) FROM load") == 1);
  write_megabytes(70);
  CHECK(bench.store->counters().wal_bytes > 70'000'000);
  CHECK(bench.store->counters().checkpoint_failures == 0);
  REQUIRE(holder.failure("COMMIT") == "");
  write_megabytes(10);
  // Answers come before checkpoints: the count is final once the writer has closed or taken the next group.
  CHECK(eventually([&] { return bench.store->counters().wal_bytes < 10'000'000; }));
  CHECK(Reader(bench.folder.database()).notes(id).size() == 80);
}
