// Acknowledged means durable, second proof: a power cut leaves only what was synced. The disk of
// faulty_disk.h keeps exactly that; the control shows that it would notice a missing sync.
#include <doctest/doctest.h>

#include <filesystem>

#include "storage/faulty_disk.h"
#include "storage/store.h"
#include "storage/support.h"

using namespace hearthfront::storage;
using namespace hearthfront::storage::test;

namespace {

std::int64_t readings_after_power_cut(const std::string& synced) {
  const Folder restart;
  for (const auto& file : std::filesystem::directory_iterator(synced)) {
    std::filesystem::copy_file(file.path(), restart.path() + "/" + file.path().filename().string());
  }
  Store store(at(restart.database()));
  Outside outside(restart.database());
  REQUIRE(outside.sound());
  return outside.number("SELECT count(*) FROM reading");
}

}  // namespace

TEST_CASE("a power cut after any acknowledgement loses nothing") {
  const Folder folder, synced;
  const FaultyDisk disk(folder.path(), synced.path());
  Store store(at(folder.database()));
  const auto channel = store.register_channel("pit-2", "temperature");
  for (std::int64_t n = 1; n <= 40; ++n) {
    store.append(series(channel, n * 10, 5), {});
    CHECK(readings_after_power_cut(synced.path()) == n * 5);
  }
  SUBCASE("also where a checkpoint has moved the rows and the write-ahead file starts over") {
    std::int64_t sent = 200;
    for (std::int64_t n = 0; n < 24; ++n) {
      sent += static_cast<std::int64_t>(store.append(series(channel, 10'000 + n * 8'000, 8'000), {}).size());
      if (n % 4 == 3) CHECK(readings_after_power_cut(synced.path()) == sent);
    }
  }
  SUBCASE("also after a clean close") {
    store.close();
    CHECK(readings_after_power_cut(synced.path()) == 200);
  }
}

// The same proof must fail where the sync at commit is left out (sqlite.org/pragma.html#pragma_synchronous:
// NORMAL in WAL mode may lose commits at a power cut).
TEST_CASE("control: with reduced synchronisation the same power cut does lose commits") {
  const Folder folder, synced;
  { const Store store(at(folder.database())); }
  const FaultyDisk disk(folder.path(), synced.path());
  Outside careless(folder.database());
  REQUIRE(careless.failure(
              "PRAGMA synchronous=FULL; INSERT INTO channel(furnace, name) VALUES('pit-2', 'x')") == "");
  REQUIRE(careless.failure("PRAGMA wal_checkpoint(TRUNCATE); PRAGMA synchronous=NORMAL") == "");
  for (int n = 0; n < 40; ++n) {
    REQUIRE(careless.failure("INSERT INTO reading VALUES(1, " + std::to_string(n) + ", 900.0)") == "");
  }
  CHECK(careless.number("SELECT count(*) FROM reading") == 40);
  CHECK(readings_after_power_cut(synced.path()) < 40);
}
