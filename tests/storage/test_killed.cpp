// Acknowledged means durable, first proof: the process is killed in full work and everything it said was
// stored is there afterwards.
#include <doctest/doctest.h>
#include <signal.h>
#include <sys/wait.h>
#include <unistd.h>

#include <array>
#include <cstdlib>
#include <fstream>
#include <random>
#include <set>
#include <thread>

#include "storage/store.h"
#include "storage/support.h"

using namespace hearthfront::storage;
using namespace hearthfront::storage::test;

namespace {

constexpr int senders = 4, batch = 3;

// Sends until it is killed, and reports each batch's first time as soon as the store has acknowledged it.
[[noreturn]] void send_for_ever(const std::string& path, int report_to, std::int64_t from_us) {
  Store store(at(path));
  const auto channel = store.register_channel("pit-2", "temperature");
  std::vector<std::thread> threads;
  threads.reserve(senders);
  for (std::int64_t i = 0; i < senders; ++i) {
    threads.emplace_back([&, i] {
      for (std::int64_t time = from_us + i * 1'000'000;; time += batch) {
        store.append(series(channel, time, batch), {});
        // Short enough to be written whole (POSIX: PIPE_BUF).
        if (::write(report_to, &time, sizeof time) != sizeof time) ::_exit(4);
      }
    });
  }
  for (auto& thread : threads) thread.join();
  ::_exit(5);
}

}  // namespace

TEST_CASE("twenty kills in full work lose no acknowledged reading") {
  const Folder folder;
  std::mt19937 random(20);
  std::set<std::int64_t> acknowledged;
  for (int round = 0; round < 20; ++round) {
    CAPTURE(round);
    std::array<int, 2> ends{};
    REQUIRE(::pipe(ends.data()) == 0);
    const pid_t child = ::fork();
    if (child == 0) {
      ::close(ends[0]);
      send_for_ever(folder.database(), ends[1], round * 10'000'000LL);
    }
    ::close(ends[1]);
    std::int64_t time = 0;
    for (auto left = 20 + random() % 300; left > 0; --left) {
      REQUIRE(::read(ends[0], &time, sizeof time) == sizeof time);
      acknowledged.insert(time);
    }
    REQUIRE(::kill(child, SIGKILL) == 0);
    while (::read(ends[0], &time, sizeof time) == sizeof time) acknowledged.insert(time);
    ::close(ends[0]);
    int status = 0;
    REQUIRE(::waitpid(child, &status, 0) == child);
    CHECK(WIFSIGNALED(status));
  }

  CHECK(Outside(folder.database()).text("SELECT value FROM meta WHERE key = 'store.shutdown'") == "open");
  // The next opening notices the crash, checks the file and goes on.
  CHECK_FALSE(fault_of([&] { const Store store(at(folder.database())); }));
  std::int64_t missing = 0;
  std::int64_t whole = 0;
  {
    Reader reader(folder.database());
    for (const std::int64_t first : acknowledged) {
      if (reader.accepted(1, first, first + batch - 1).size() != batch) ++missing;
    }
    whole = static_cast<std::int64_t>(reader.accepted(1, 0, 1'000'000'000).size());
  }
  MESSAGE(acknowledged.size() << " acknowledged batches, " << whole << " readings stored");
  CHECK(missing == 0);
  CHECK(whole % batch == 0);  // no batch is half there
  Outside outside(folder.database());
  CHECK(outside.sound());
  CHECK(outside.number("SELECT count(*) FROM reading") == whole);
  CHECK(outside.number("SELECT stored FROM channel WHERE id = 1") == whole);

  const std::string answer = folder.path() + "/answer.txt";
  const std::string command =
      "sqlite3 '" + folder.database() + "' 'PRAGMA integrity_check' > '" + answer + "'";
  REQUIRE(std::system(command.c_str()) == 0);
  std::string line;
  std::getline(std::ifstream(answer) >> std::ws, line);
  CHECK(line == "ok");
}
