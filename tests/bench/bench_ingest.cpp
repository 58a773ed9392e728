// Durable ingest over REST against raw SQLite group commit with the same table, both in one run on one disk.
//   bench_ingest BINARY [FOLDER [ROUNDS]]
// Ours: the real daemon, 8 keep-alive clients, JSON batches of 100, full sync, each answer awaited.
// Reference: one thread, prepared statement, WAL, synchronous=FULL, the same readings in groups of 800: what
// 8 clients of 100 could be at best grouped to. Sides take turns, and the
// ratio is taken within a round, since the speed of a shared disk drifts; medians are printed.
#include <arpa/inet.h>
#include <netinet/tcp.h>
#include <sqlite3.h>
#include <sys/wait.h>
#include <unistd.h>

#include <algorithm>
#include <chrono>
#include <csignal>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <filesystem>
#include <fstream>
#include <stdexcept>
#include <string>
#include <thread>
#include <vector>

namespace fs = std::filesystem;
using Clock = std::chrono::steady_clock;

namespace {

constexpr int clients = 8, batch = 100, batches_each = 250;
constexpr int total = clients * batch * batches_each;
constexpr int port = 18473;

double seconds_since(Clock::time_point start) {
  return std::chrono::duration<double>(Clock::now() - start).count();
}

int connect_daemon() {
  const int fd = socket(AF_INET, SOCK_STREAM, 0);
  sockaddr_in address{};
  address.sin_family = AF_INET;
  address.sin_port = htons(port);
  address.sin_addr.s_addr = htonl(INADDR_LOOPBACK);
  const int one = 1;
  setsockopt(fd, IPPROTO_TCP, TCP_NODELAY, &one, sizeof one);
  if (connect(fd, reinterpret_cast<sockaddr*>(&address), sizeof address) != 0) {
    close(fd);
    return -1;
  }
  return fd;
}

void send_all(int fd, const std::string& text) {
  for (std::size_t at = 0; at < text.size();) {
    const ssize_t sent = send(fd, text.data() + at, text.size() - at, MSG_NOSIGNAL);
    if (sent <= 0) throw std::runtime_error("the daemon closed the connection");
    at += static_cast<std::size_t>(sent);
  }
}

// Reads one answer with a Content-Length; returns its body.
std::string read_answer(int fd, std::string& buffer) {
  while (true) {
    const auto head = buffer.find("\r\n\r\n");
    if (head != std::string::npos) {
      const auto at = buffer.find("Content-Length: ");
      const std::size_t length = std::strtoul(buffer.c_str() + at + 16, nullptr, 10);
      if (buffer.size() >= head + 4 + length) {
        if (buffer.compare(9, 3, "200") != 0)
          throw std::runtime_error("unexpected answer: " + buffer.substr(0, 300));
        std::string body = buffer.substr(head + 4, length);
        buffer.erase(0, head + 4 + length);
        return body;
      }
    }
    char chunk[16384];
    const ssize_t got = recv(fd, chunk, sizeof chunk, 0);
    if (got <= 0) throw std::runtime_error("the daemon closed the connection");
    buffer.append(chunk, static_cast<std::size_t>(got));
  }
}

// Minute-like readings, all new: client c, batch b of a round.
std::string request(int client, int number) {
  std::string body = "{\"readings\":[";
  for (int i = 0; i < batch; ++i) {
    const long second = static_cast<long>(number) * batch + i;
    char item[160];
    std::snprintf(item, sizeof item,
                  "%s{\"furnace\":\"bench%d\",\"channel\":\"t\",\"time\":\"2026-01-%02ldT%02ld:%02ld:%"
                  "02ldZ\",\"value\":%.1f}",
                  i ? "," : "", client, 1 + second / 86400, second / 3600 % 24, second / 60 % 60, second % 60,
                  900.0 + i % 50);
    body += item;
  }
  body += "]}";
  return "POST /api/v1/readings HTTP/1.1\r\nHost: 127.0.0.1\r\nContent-Type: "
         "application/json\r\nContent-Length: " +
         std::to_string(body.size()) + "\r\n\r\n" + body;
}

double daemon_round(int round) {
  std::vector<std::vector<std::string>> requests(clients);
  for (int c = 0; c < clients; ++c)
    for (int b = 0; b < batches_each; ++b)
      requests[static_cast<std::size_t>(c)].push_back(request(c, round * batches_each + b));
  std::vector<std::thread> threads;
  threads.reserve(clients);
  const auto start = Clock::now();
  for (int c = 0; c < clients; ++c) {
    threads.emplace_back([&own = requests[static_cast<std::size_t>(c)]] {
      const int fd = connect_daemon();
      std::string buffer;
      for (const std::string& text : own) {
        send_all(fd, text);
        const std::string body = read_answer(fd, buffer);
        if (body.find("\"stored\":100,") == std::string::npos)
          throw std::runtime_error("not stored: " + body.substr(0, 200));
      }
      close(fd);
    });
  }
  for (std::thread& thread : threads) thread.join();
  return total / seconds_since(start);
}

void check(int code, sqlite3* db) {
  if (code != SQLITE_OK && code != SQLITE_DONE && code != SQLITE_ROW)
    throw std::runtime_error(sqlite3_errmsg(db));
}

double raw_round(sqlite3* db, int round) {
  constexpr int group = clients * batch;
  sqlite3_stmt* insert = nullptr;
  check(sqlite3_prepare_v2(db, "INSERT INTO reading VALUES(?,?,?) ON CONFLICT DO NOTHING", -1, &insert,
                           nullptr),
        db);
  const auto start = Clock::now();
  for (int done = 0; done < total; done += group) {
    check(sqlite3_exec(db, "BEGIN IMMEDIATE", nullptr, nullptr, nullptr), db);
    for (int i = 0; i < group; ++i) {
      const int second = round * batches_each * batch + done / clients + i % batch;
      sqlite3_bind_int64(insert, 1, i / batch);
      sqlite3_bind_int64(insert, 2, 1'767'225'600'000'000LL + 1'000'000LL * second);
      sqlite3_bind_double(insert, 3, 900.0 + i % 50);
      check(sqlite3_step(insert), db);
      sqlite3_reset(insert);
    }
    check(sqlite3_exec(db, "COMMIT", nullptr, nullptr, nullptr), db);
  }
  const double rate = total / seconds_since(start);
  sqlite3_finalize(insert);
  return rate;
}

pid_t start_daemon(const std::string& binary, const fs::path& folder) {
  std::ofstream(folder / "hearthfront.toml") << "[listen]\nport = " << port << "\n[log]\nlevel = \"warn\"\n";
  std::ofstream plant(folder / "plant.toml");
  plant << "[plant]\nname = \"bench\"\n";
  for (int c = 0; c < clients; ++c)
    plant << "[[furnace]]\nid = \"bench" << c << "\"\nname = \"bench\"\n[[furnace.channel]]\nname = \"t\"\n"
          << "role = \"temperature\"\nunit = \"degC\"\n";
  plant.close();
  fs::copy_file(HF_SOURCE_DIR "/config/steels.toml", folder / "steels.toml",
                fs::copy_options::overwrite_existing);
  const pid_t child = fork();
  if (child == 0) {
    execl(binary.c_str(), binary.c_str(), "serve", "--settings", (folder / "hearthfront.toml").c_str(),
          nullptr);
    _exit(127);
  }
  for (int i = 0; i < 200; ++i) {
    const int fd = connect_daemon();
    if (fd >= 0) {
      close(fd);
      return child;
    }
    std::this_thread::sleep_for(std::chrono::milliseconds(50));
  }
  throw std::runtime_error("the daemon did not start");
}

double median(std::vector<double> values) {
  std::sort(values.begin(), values.end());
  return values[values.size() / 2];
}

}  // namespace

int main(int argc, char** argv) {
  if (argc < 2) {
    std::fprintf(stderr, "bench_ingest BINARY [FOLDER [ROUNDS]]\n");
    return 2;
  }
  const fs::path folder = fs::path(argc > 2 ? argv[2] : fs::temp_directory_path().string()) /
                          ("hearthfront-bench-" + std::to_string(getpid()));
  const int rounds = argc > 3 ? std::max(1, std::atoi(argv[3])) : 5;
  fs::create_directories(folder);
  pid_t daemon = 0;
  int code = 0;
  try {
    daemon = start_daemon(argv[1], folder);
    sqlite3* db = nullptr;
    check(sqlite3_open((folder / "raw.db").c_str(), &db), db);
    check(
        sqlite3_exec(
            db,
            "PRAGMA journal_mode=WAL; PRAGMA synchronous=FULL; PRAGMA foreign_keys=ON;"
            "CREATE TABLE channel(id INTEGER PRIMARY KEY, furnace TEXT NOT NULL, name TEXT NOT NULL) STRICT;"
            "CREATE TABLE reading(channel INTEGER NOT NULL REFERENCES channel(id), time_us INTEGER NOT NULL,"
            "value REAL NOT NULL, PRIMARY KEY(channel, time_us, value)) STRICT, WITHOUT ROWID;"
            "INSERT INTO channel(id, furnace, name) VALUES(0,'b','t'),(1,'c','t'),(2,'d','t'),(3,'e','t'),"
            "(4,'f','t'),(5,'g','t'),(6,'h','t'),(7,'i','t')",
            nullptr, nullptr, nullptr),
        db);
    std::vector<double> ours, raw, ratios;
    for (int round = 0; round < rounds; ++round) {
      ours.push_back(daemon_round(round));
      raw.push_back(raw_round(db, round));
      ratios.push_back(ours.back() / raw.back());
      std::printf("round %d: daemon %.0f readings/s, raw SQLite %.0f readings/s, ratio %.2f\n", round + 1,
                  ours.back(), raw.back(), ratios.back());
    }
    sqlite3_close(db);
    std::printf(
        "durable ingest, 8 clients x batches of 100, full sync, medians of %d rounds: ours %.0f readings/s, "
        "raw SQLite %.0f readings/s, ratio within a round %.2f (wanted: 0.60)\n",
        rounds, median(ours), median(raw), median(ratios));
  } catch (const std::exception& error) {
    std::fprintf(stderr, "%s\n", error.what());
    code = 1;
  }
  if (daemon > 0) {
    kill(daemon, SIGTERM);
    waitpid(daemon, nullptr, 0);
  }
  fs::remove_all(folder);
  return code;
}
