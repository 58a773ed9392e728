// Opening, migrating, refusing: what a store does before it takes the first reading. All rules here are the
// project's own unless a source is named.
#include <doctest/doctest.h>
#include <fcntl.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <unistd.h>

#include <SQLiteCpp/Database.h>

#include <array>
#include <filesystem>
#include <fstream>

#include "storage/connection.h"
#include "storage/schema.h"
#include "storage/store.h"
#include "storage/support.h"

using namespace hearthfront::storage;
using namespace hearthfront::storage::test;

TEST_CASE("every past schema version opens and is brought to the newest") {
  for (std::size_t past = 0; past < migrations().size(); ++past) {
    const Folder folder;
    {
      Connection connection(folder.database(), Connection::Role::writer);
      migrate(connection, migrations().first(past));
      CHECK(schema_version(connection) == static_cast<int>(past));
    }
    Store store(at(folder.database()));
    CHECK(Outside(folder.database()).number("PRAGMA user_version") == migrations().back().version);
    CHECK(Reader(folder.database()).open_loads().empty());
  }
}

TEST_CASE("loads of the first version keep their chambers when their file is brought up to date") {
  const Folder folder;
  {
    Connection connection(folder.database(), Connection::Role::writer);
    migrate(connection, migrations().first(1));
    connection.database().exec(
        "INSERT INTO load VALUES(1, '2290', 'pit-2', 'main', 'Day shift', 100, 200, 100, 2, '{}');"
        "INSERT INTO load VALUES(2, '2291', 'pit-2', 'main', 'Day shift', 200, NULL, 200, 1, '{}');"
        "INSERT INTO load_revision VALUES(1, 1, 100, 'Day shift', 'start load', '', '{}', NULL, NULL);"
        "INSERT INTO load_revision VALUES(1, 2, 200, 'Day shift', 'end load', '{}', '{}', NULL, 200);"
        "INSERT INTO load_revision VALUES(2, 1, 200, 'Day shift', 'start load', '', '{}', NULL, NULL);"
        "INSERT INTO result VALUES(1, 1, 2, 210, 'model 1', '{\"a\":1}', 0)");
  }
  Store store(at(folder.database()));
  Reader reader(folder.database());
  REQUIRE(reader.stays(1).size() == 1);
  CHECK(reader.stays(1)[0].to_us == 200);
  REQUIRE(reader.open_loads().size() == 1);
  CHECK(reader.open_loads()[0].id == 2);
  CHECK_FALSE(reader.open_loads()[0].cancelled);
  CHECK_FALSE(reader.stays(2)[0].to_us.has_value());
  CHECK(reader.ended_touching("pit-2", 150, 160).size() == 1);
  CHECK(reader.ended_without_result().empty());
  CHECK(reader.result(1)->result_json == "{\"a\":1}");
  CHECK(reader.revisions(1).size() == 2);
  // The open one still holds its chamber, and is ended as ever.
  CHECK(fault_of([&] { store.create_load(load("2292", 300), by("Day shift", "start load")); }) ==
        StorageFault::misuse);
  store.revise_load(2, 1, "", 300, by("Day shift", "end load"));
  store.create_load(load("2292", 300), by("Day shift", "start load"));
  CHECK(Outside(folder.database()).sound());
}

TEST_CASE("migrations are numbered one by one from 1, and named") {
  int expected = 1;
  for (const Migration& step : migrations()) {
    CHECK(step.version == expected++);
    CHECK(std::string(step.name) != "");
  }
}

TEST_CASE("a migration that fails half-way leaves the version before it") {
  const Folder folder;
  const std::array<Migration, 2> steps{{{1, "good", "CREATE TABLE migration(version INTEGER, name TEXT)"},
                                        {2, "bad", "CREATE TABLE half(x INTEGER); SELECT no_such_thing()"}}};
  Connection connection(folder.database(), Connection::Role::writer);
  CHECK(fault_of([&] { migrate(connection, steps); }).has_value());
  CHECK(schema_version(connection, steps) == 1);
  Outside outside(folder.database());
  CHECK(outside.number("SELECT count(*) FROM sqlite_master WHERE name = 'half'") == 0);
  CHECK(outside.number("SELECT count(*) FROM migration") == 1);
}

TEST_CASE("every table is STRICT") {
  const Folder folder;
  const Store store(at(folder.database()));
  Outside outside(folder.database());
  CHECK(outside.number("SELECT count(*) FROM pragma_table_list WHERE schema = 'main' AND type = 'table' "
                       "AND strict = 0 AND name NOT LIKE 'sqlite_%'") == 0);
  CHECK(contains(outside.failure("INSERT INTO reading VALUES(1, 'noon', 900.0)"), "cannot store TEXT"));
}

TEST_CASE("a file of a newer program is refused by name and stays as it is") {
  const Folder folder;
  { const Store store(at(folder.database())); }
  Outside(folder.database())
      .failure("INSERT INTO migration VALUES(99, 'bath records'); PRAGMA user_version=99");
  std::string text;
  CHECK(fault_of([&] { const Store store(at(folder.database())); }, &text) == StorageFault::newer_schema);
  CHECK(contains(text, "99"));
  CHECK(contains(text, "bath records"));
  CHECK(fault_of([&] { const Reader reader(folder.database()); }) == StorageFault::newer_schema);
  CHECK(Outside(folder.database()).number("PRAGMA user_version") == 99);
}

TEST_CASE("the database of another program is refused and stays as it is") {
  const Folder folder;
  CHECK(Outside(folder.database()).failure("CREATE TABLE invoice(x)") == "");
  CHECK(fault_of([&] { const Store store(at(folder.database())); }) == StorageFault::misuse);
  CHECK(Outside(folder.database()).number("SELECT count(*) FROM sqlite_master") == 1);
}

TEST_CASE("a file that is no database is named as damaged") {
  const Folder folder;
  std::ofstream(folder.database()) << std::string(8192, 'x');
  std::string text;
  CHECK(fault_of([&] { const Store store(at(folder.database())); }, &text) == StorageFault::corrupt);
  CHECK(contains(text, "backup"));
}

// Synchronisation belongs to a connection and cannot be seen from another one: test_power_loss.cpp shows its
// effect instead.
TEST_CASE("the write-ahead log is on, seen from outside, and its absence is refused") {
  const Folder folder;
  { const Store store(at(folder.database())); }
  Outside outside(folder.database());
  CHECK(outside.text("PRAGMA journal_mode") == "wal");
  REQUIRE(outside.text("PRAGMA journal_mode=DELETE") == "delete");
  std::string text;
  CHECK(fault_of([&] { const Reader reader(folder.database()); }, &text) == StorageFault::io);
  CHECK(contains(text, "journal_mode"));
}

TEST_CASE("a second store on the same file is refused and told who holds it, also through a link") {
  const Folder folder;
  const std::string other_name = folder.path() + "/other-name.db";
  {
    const Store store(at(folder.database()));
    std::filesystem::create_symlink(folder.database(), other_name);
    std::string text;
    CHECK(fault_of([&] { const Store second(at(folder.database())); }, &text) == StorageFault::locked);
    CHECK(contains(text, "process " + std::to_string(::getpid())));
    CHECK(contains(text, "Stop that one first"));
    CHECK(fault_of([&] { const Store second(at(other_name)); }) == StorageFault::locked);
  }
  CHECK_FALSE(fault_of([&] { const Store again(at(other_name)); }));
}

TEST_CASE("closing gives up the lock, twice is once, and later writes say so") {
  const Folder folder;
  Store store(at(folder.database()));
  const auto channel = store.register_channel("pit-2", "temperature");
  store.append(series(channel, 1, 3), {});
  store.close();
  store.close();
  CHECK(fault_of([&] { store.append(series(channel, 9, 1), {}); }) == StorageFault::closing);
  CHECK(fault_of([&] { store.meta("plant"); }) == StorageFault::closing);
  Store again(at(folder.database()));
  CHECK(again.register_channel("pit-2", "temperature") == channel);
  CHECK(Reader(folder.database()).accepted(channel, 0, 10).size() == 3);
}

TEST_CASE("a clean close leaves one file that is complete by itself") {
  const Folder folder;
  {
    Store store(at(folder.database()));
    store.append(series(store.register_channel("pit-2", "temperature"), 1, 100), {});
  }
  CHECK_FALSE(std::filesystem::exists(folder.database() + "-wal"));
  const std::string copy = folder.path() + "/copy.db";
  std::filesystem::copy_file(folder.database(), copy);
  Outside outside(copy);
  CHECK(outside.number("SELECT count(*) FROM reading") == 100);
  CHECK(outside.text("SELECT value FROM meta WHERE key = 'store.shutdown'") == "closed");
}

TEST_CASE("damage is looked for after a crash, and the answer is to restore a backup") {
  const Folder folder;
  {
    Store store(at(folder.database()));
    store.append(series(store.register_channel("pit-2", "temperature"), 1, 20'000), {});
  }
  const auto shutdown = [&](const std::string& state) {
    return Outside(folder.database())
        .failure("UPDATE meta SET value = '" + state + "' WHERE key = 'store.shutdown'");
  };
  REQUIRE(shutdown("open") == "");
  CHECK_FALSE(fault_of([&] { const Store sound(at(folder.database())); }));

  REQUIRE(shutdown("open") == "");
  {
    std::fstream file(folder.database(), std::ios::in | std::ios::out | std::ios::binary);
    file.seekp(static_cast<std::streamoff>(std::filesystem::file_size(folder.database()) / 2 / 4096 * 4096));
    file << std::string(4096, '\x5a');
  }
  std::string text;
  CHECK(fault_of([&] { const Store damaged(at(folder.database())); }, &text) == StorageFault::corrupt);
  CHECK(contains(text, "restore the newest backup"));
  auto unchecked = at(folder.database());
  unchecked.check_integrity_after_crash = false;
  CHECK_FALSE(fault_of([&] { const Store opened(unchecked); }));
}

TEST_CASE("a missing folder, an empty path and a missing file for a reader are named") {
  const Folder folder;
  std::string text;
  CHECK(fault_of([&] { const Store store(at(folder.path() + "/none/plant.db")); }, &text) ==
        StorageFault::io);
  CHECK(contains(text, "Create its folder"));
  CHECK(fault_of([&] { const Store store(at("")); }) == StorageFault::misuse);
  CHECK(fault_of([&] { const Reader reader(folder.database()); }, &text) == StorageFault::io);
  CHECK(contains(text, folder.database()));
}

TEST_CASE("a file deleted or replaced under a running store takes no more readings") {
  const Folder folder;
  Store store(at(folder.database()));
  const auto channel = store.register_channel("pit-2", "temperature");
  store.append(series(channel, 1, 1), {});
  Reader reader(folder.database());
  const std::string aside = folder.path() + "/aside.db";
  std::filesystem::rename(folder.database(), aside);
  std::string text;
  CHECK(fault_of([&] { store.append(series(channel, 2, 1), {}); }, &text) == StorageFault::io);
  CHECK(contains(text, "is gone while in use"));
  CHECK(fault_of([&] { reader.open_loads(); }) == StorageFault::io);

  std::ofstream(folder.database()) << "other";
  CHECK(fault_of([&] { store.append(series(channel, 2, 1), {}); }, &text) == StorageFault::io);
  CHECK(contains(text, "was replaced"));
  std::filesystem::rename(aside, folder.database());
  CHECK(store.append(series(channel, 2, 1), {}) == std::vector{Taken::stored});

  std::filesystem::rename(folder.database() + "-wal", aside);
  CHECK(fault_of([&] { store.append(series(channel, 3, 1), {}); }) == StorageFault::io);
  std::filesystem::rename(aside, folder.database() + "-wal");
  CHECK(reader.accepted(channel, 0, 9).size() == 2);
}

TEST_CASE("a write-protected file is refused in words, not opened for reading only") {
  const Folder folder;
  { const Store store(at(folder.database())); }
  constexpr uid_t nobody = 65534;
  const bool root = ::geteuid() == 0;  // the superuser may write to anything, so the child steps down
  REQUIRE(::chmod(folder.path().c_str(), 0755) == 0);
  if (root) {
    for (const auto& name : {folder.path(), folder.database(), folder.database() + ".lock"}) {
      REQUIRE(::chown(name.c_str(), nobody, nobody) == 0);
    }
  }
  REQUIRE(::chmod(folder.database().c_str(), 0444) == 0);
  const pid_t child = ::fork();
  if (child == 0) {
    if (root && (::setgid(nobody) != 0 || ::setuid(nobody) != 0)) ::_exit(3);
    std::string text;
    const auto fault = fault_of([&] { const Store store(at(folder.database())); }, &text);
    ::_exit(fault == StorageFault::io && contains(text, "write-protected") ? 0 : 1);
  }
  int status = -1;
  REQUIRE(::waitpid(child, &status, 0) == child);
  CHECK(WIFEXITED(status));
  CHECK(WEXITSTATUS(status) == 0);
}

TEST_CASE("settings are kept, changed and, where they are the store's own, refused") {
  const Folder folder;
  Store store(at(folder.database()));
  CHECK_FALSE(store.meta("plant").has_value());
  store.set_meta("plant", "one");
  store.set_meta("plant", "two");
  CHECK(store.meta("plant") == "two");
  CHECK(fault_of([&] { store.set_meta("store.shutdown", "closed"); }) == StorageFault::misuse);
  CHECK(fault_of([&] { store.set_meta("", "x"); }) == StorageFault::misuse);
}
