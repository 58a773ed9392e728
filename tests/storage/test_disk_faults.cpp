// A disk that fails: whatever call fails, what was acknowledged stays, what was refused is not there, and
// after a failed sync nothing more is acknowledged (a repeated sync may "succeed" although the kernel dropped
// the pages: Rebello et al., "Can Applications Recover from fsync Failures?", USENIX ATC 2020).
#include <doctest/doctest.h>
#include <sys/mount.h>
#include <unistd.h>

#include <atomic>
#include <filesystem>
#include <fstream>
#include <latch>
#include <thread>

#include "storage/faulty_disk.h"
#include "storage/store.h"
#include "storage/support.h"

using namespace hearthfront::storage;
using namespace hearthfront::storage::test;

namespace {

constexpr int batches = 6, batch_rows = 200;

struct Attempt {
  std::vector<std::optional<StorageFault>> faults;  // of each batch
  bool struck = false;
};

// Sends a few batches while the nth call that `kind` can hit fails, then restarts on a sound disk.
Attempt send_with_fault(const std::string& folder, const std::string& path, DiskFault kind, int nth) {
  FaultyDisk disk(folder);
  Attempt attempt;
  Store store(at(path));
  const auto channel = store.register_channel("pit-2", "temperature");
  disk.arm(kind, nth);
  for (std::int64_t n = 0; n < batches; ++n) {
    attempt.faults.push_back(fault_of([&] { store.append(series(channel, n * 1'000, batch_rows), {}); }));
  }
  store.close();  // may be what fails; it is no acknowledgement
  attempt.struck = disk.struck();
  return attempt;
}

void check_every_nth_call(DiskFault kind, StorageFault expected) {
  int refused = 0;
  int nth = 1;
  for (bool struck = true; struck && nth < 500; ++nth) {
    CAPTURE(nth);
    const Folder folder;
    const Attempt attempt = send_with_fault(folder.path(), folder.database(), kind, nth);
    struck = attempt.struck;
    { const Store restarted(at(folder.database())); }
    Outside outside(folder.database());
    CHECK(outside.sound());
    bool unknown = false;
    for (int n = 0; n < batches; ++n) {
      CAPTURE(n);
      const auto& fault = attempt.faults[static_cast<std::size_t>(n)];
      const auto rows =
          outside.number("SELECT count(*) FROM reading WHERE time_us / 1000 = " + std::to_string(n));
      if (!fault) {
        CHECK(rows == batch_rows);
        CHECK_FALSE(unknown);  // nothing may be acknowledged after a failed sync
      } else {
        ++refused;
        CHECK(fault == expected);
        if (fault == StorageFault::unknown_fate) {
          unknown = true;
          CHECK((rows == 0 || rows == batch_rows));
        } else {
          CHECK(rows == 0);
        }
      }
    }
  }
  CHECK(nth > batches);  // the fault was tried in each of the commits,
  CHECK(nth < 500);      // and the loop ended because no call was left to fail
  CHECK(refused >= batches);
}

}  // namespace

TEST_CASE("a failed write, at any call, takes back its own batch only") {
  check_every_nth_call(DiskFault::write_error, StorageFault::io);
}

TEST_CASE("a full disk, at any call, takes back its own batch only") {
  check_every_nth_call(DiskFault::no_space, StorageFault::full);
}

TEST_CASE("a failed sync, at any call, ends all acknowledgements until the restart") {
  check_every_nth_call(DiskFault::sync_error, StorageFault::unknown_fate);
}

TEST_CASE("after a failed sync every kind of write is refused, and says what to do") {
  const Folder folder;
  FaultyDisk disk(folder.path());
  Store store(at(folder.database()));
  const auto channel = store.register_channel("pit-2", "temperature");
  CHECK_FALSE(store.counters().poisoned);
  disk.arm(DiskFault::sync_error, 1);
  std::string text;
  CHECK(fault_of([&] { store.append(series(channel, 1, 1), {}); }, &text) == StorageFault::unknown_fate);
  CHECK(contains(text, "restart"));
  CHECK(store.counters().poisoned);
  CHECK(store.take_changes().empty());
  CHECK(fault_of([&] { store.append(series(channel, 2, 1), {}); }) == StorageFault::unknown_fate);
  CHECK(fault_of([&] { store.set_meta("a", "b"); }) == StorageFault::unknown_fate);
  CHECK(fault_of([&] { store.create_load(load("2291", 1), by("A", "start")); }) ==
        StorageFault::unknown_fate);
  CHECK(store.register_channel("pit-2", "temperature") == channel);  // known already: nothing is written
}

TEST_CASE("what was waiting already when a sync failed is refused as well") {
  const Folder folder;
  FaultyDisk disk(folder.path());
  Store store(at(folder.database()));
  const auto channel = store.register_channel("pit-2", "temperature");
  std::latch held{1}, go{1};
  std::atomic<bool> first = true;
  store.on_change([&] {
    if (!first.exchange(false)) return;
    held.count_down();
    go.wait();
  });
  store.append(series(channel, -1, 1), {});
  held.wait();
  // Each is more than half of what one transaction takes: three groups.
  std::atomic<int> unknown = 0;
  std::vector<std::thread> senders;
  senders.reserve(3);
  for (std::int64_t i = 0; i < 3; ++i) {
    senders.emplace_back([&, i] {
      if (fault_of([&] { store.append(series(channel, i * 10'000, 6'000), {}); }) ==
          StorageFault::unknown_fate)
        ++unknown;
    });
  }
  CHECK(eventually([&] { return store.counters().queued_jobs == 3; }));
  disk.arm(DiskFault::sync_error, 1);
  go.count_down();
  for (auto& sender : senders) sender.join();
  CHECK(unknown == 3);
}

TEST_CASE("a sync that fails while a checkpoint copies rows is not passed over") {
  const Folder folder;
  std::int64_t acknowledged = 0;
  {
    FaultyDisk disk(folder.path());
    Store store(at(folder.database()));
    const auto channel = store.register_channel("pit-2", "temperature");
    disk.arm(DiskFault::sync_error, 1, "plant.db");  // the database file: only checkpoints sync that one
    std::optional<StorageFault> fault;
    for (std::int64_t n = 0; n < 60 && !fault; ++n) {
      fault = fault_of([&] { store.append(series(channel, n * 8'000, 8'000), {}); });
      if (!fault) acknowledged += 8'000;
    }
    CHECK(fault == StorageFault::unknown_fate);
    CHECK(store.counters().poisoned);
    CHECK(store.counters().checkpoint_failures == 1);
    store.close();
    CHECK(std::filesystem::file_size(folder.database() + "-wal") > 1'000'000);  // the sure copy stays
  }
  const Store restarted(at(folder.database()));
  Outside outside(folder.database());
  CHECK(outside.sound());
  CHECK(outside.number("SELECT count(*) FROM reading") == acknowledged);
}

TEST_CASE("at its size limit the store says full, keeps what it has, and still knows duplicates") {
  const Folder folder;
  auto options = at(folder.database());
  options.max_file_bytes = 400'000;
  Store store(options);
  const auto channel = store.register_channel("pit-2", "temperature");
  std::int64_t acknowledged = 0;
  std::optional<StorageFault> fault;
  std::string text;
  while (!fault && acknowledged < 1'000'000) {
    fault = fault_of([&] { store.append(series(channel, acknowledged, 500), {}); }, &text);
    if (!fault) acknowledged += 500;
  }
  CHECK(fault == StorageFault::full);
  CHECK(contains(text, "Free disk space"));
  CHECK(acknowledged > 1'000);
  CHECK_FALSE(store.counters().poisoned);
  store.take_changes();
  CHECK(store.append(series(channel, 0, 500), {}) == std::vector<Taken>(500, Taken::duplicate));
  // What the failed batch had done before it failed is neither counted nor announced by the next commit.
  CHECK(store.counters().readings_stored == static_cast<std::uint64_t>(acknowledged));
  CHECK(store.take_changes().empty());
  CHECK(fault_of([&] { store.append(series(channel, acknowledged, 500), {}); }) == StorageFault::full);
  CHECK(Reader(folder.database()).counts(channel).stored == acknowledged);
  store.close();
  CHECK(std::filesystem::file_size(folder.database()) <= 400'000);
  Outside outside(folder.database());
  CHECK(outside.sound());
  CHECK(outside.number("SELECT count(*) FROM reading") == acknowledged);
}

TEST_CASE("on a disk that is really full the store says so, and goes on when there is room again") {
  const Folder folder;
  // A tiny disk of its own needs the superuser; elsewhere the two tests above stand for this one.
  if (::geteuid() != 0 || ::mount("tmpfs", folder.path().c_str(), "tmpfs", 0, "size=2m") != 0) {
    MESSAGE("no right to mount a small disk: not run");
    return;
  }
  struct Unmount {
    const std::string& path;
    ~Unmount() { ::umount2(path.c_str(), MNT_DETACH); }
  } const unmount{folder.path()};
  const std::string ballast = folder.path() + "/ballast";
  std::ofstream(ballast) << std::string(700'000, 'x');

  std::int64_t acknowledged = 0;
  {
    Store store(at(folder.database()));
    const auto channel = store.register_channel("pit-2", "temperature");
    std::optional<StorageFault> fault;
    while (!fault && acknowledged < 1'000'000) {
      fault = fault_of([&] { store.append(series(channel, acknowledged, 500), {}); });
      if (!fault) acknowledged += 500;
    }
    CHECK(fault == StorageFault::full);
    CHECK_FALSE(store.counters().poisoned);
    CHECK(Reader(folder.database()).counts(channel).stored == acknowledged);
    std::filesystem::remove(ballast);
    CHECK(store.append(series(channel, acknowledged, 500), {}).size() == 500);
    acknowledged += 500;
  }
  Outside outside(folder.database());
  CHECK(outside.sound());
  CHECK(outside.number("SELECT count(*) FROM reading") == acknowledged);
}
