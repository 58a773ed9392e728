// Server-sent events and the end of the server, with many clients at once.
#include <doctest/doctest.h>

#include <atomic>
#include <chrono>
#include <functional>
#include <string>
#include <thread>
#include <vector>

#include "server/api/http_server.h"
#include "server/http_client.h"

using namespace hearthfront::server;
using http_test::Client;
using http_test::get;

namespace {

struct Fixture {
  explicit Fixture(HttpLimits limits = {}) : server(limits) {
    server.route("GET", "/hello", [](const Request&) { return Response{200, "text/plain", "hello", {}}; });
    server.route("GET", "/slow", [this](const Request&) {
      running = true;
      std::this_thread::sleep_for(std::chrono::milliseconds(300));
      return Response{200, "text/plain", "done", {}};
    });
    server.stream("/events", [this](const Request& request) {
      if (request.query.count("refused") != 0) throw Problem{403, "not-you", "Not for you", "", ""};
      // An event published while the greeting is being made must follow it.
      if (request.query.count("race") != 0) server.publish("race", "1", 1);
      return std::string("event: greeting\ndata: now\n\n");
    });
    port = server.start("127.0.0.1", 0);
  }

  Client open_stream(const std::string& target = "/events") {
    Client client(port);
    client.send(get(target));
    return client;
  }

  bool comes_true(const std::function<bool(const HttpCounters&)>& wish) {
    for (int i = 0; i < 500; ++i) {
      if (wish(server.counters())) return true;
      std::this_thread::sleep_for(std::chrono::milliseconds(10));
    }
    return false;
  }

  std::atomic<bool> running = false;  // the slow handler has begun
  HttpServer server;
  int port = 0;
};

const std::string greeting = "event: greeting\ndata: now\n\n";

// The next event; comments, which only keep the line open, are passed over.
std::string next_event(Client& client) {
  std::string text;
  do {
    text = client.read_through("\n\n");
  } while (!text.empty() && text.front() == ':');
  return text;
}

double seconds_of(const std::function<void()>& action) {
  const auto start = std::chrono::steady_clock::now();
  action();
  return std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
}

}  // namespace

TEST_CASE("a stream begins with its headers and the greeting, then brings each event") {
  Fixture fixture;
  auto client = fixture.open_stream("/events?race");
  const auto head = client.read_through("\r\n\r\n");
  CHECK(head.find("HTTP/1.1 200") == 0);
  CHECK(head.find("\r\nContent-Type: text/event-stream\r\n") != std::string::npos);
  CHECK(head.find("\r\nCache-Control: no-store\r\n") != std::string::npos);
  CHECK(head.find("Content-Length") == std::string::npos);
  CHECK(client.read_through(greeting) == "retry: 2000\n\n" + greeting);
  CHECK(next_event(client) == "id: 1\nevent: race\ndata: 1\n\n");
  fixture.server.publish("load", "{\"a\":2}", 2);
  CHECK(next_event(client) == "id: 2\nevent: load\ndata: {\"a\":2}\n\n");
}

TEST_CASE("a stream can be refused, asked for with HEAD, and not with POST") {
  Fixture fixture;
  CHECK(Client(fixture.port).ask(get("/events?refused")).status == 403);
  CHECK(Client(fixture.port).ask(http_test::post("/events", "")).status == 405);
  Client client(fixture.port);
  client.send("HEAD /events HTTP/1.1\r\nHost: localhost\r\n\r\n");
  CHECK(client.read_answer(true).status == 200);
  CHECK(client.ended());
  CHECK(fixture.comes_true([](const auto& counters) { return counters.open_streams == 0; }));
}

TEST_CASE("200 streams get every event while 8 clients make requests on 4 threads") {
  HttpLimits limits;
  limits.threads = 4;
  Fixture fixture(limits);
  std::vector<Client> streams;
  for (int i = 0; i < 200; ++i) streams.push_back(fixture.open_stream());
  for (auto& stream : streams) REQUIRE_FALSE(stream.read_through(greeting).empty());
  CHECK(fixture.server.counters().open_streams == 200);
  CHECK(fixture.server.counters().open_connections == 0);

  std::atomic<int> answered = 0;
  std::vector<std::thread> clients;
  for (int c = 0; c < 8; ++c) {
    clients.emplace_back([&] {
      Client client(fixture.port);
      for (int i = 0; i < 100; ++i) {
        if (client.ask(get("/hello")).body == "hello") ++answered;
      }
    });
  }
  const std::string data(50000, 'd');
  int received = 0;
  for (std::uint64_t id = 1; id <= 5; ++id) {
    fixture.server.publish("snapshot", data, id);
    const auto expected = "id: " + std::to_string(id) + "\nevent: snapshot\ndata: " + data + "\n\n";
    for (auto& stream : streams) received += next_event(stream) == expected ? 1 : 0;
  }
  for (auto& client : clients) client.join();
  CHECK(answered == 800);
  CHECK(received == 5 * 200);
  CHECK(fixture.server.counters().dropped_streams == 0);

  streams.clear();
  CHECK(fixture.comes_true([](const auto& counters) { return counters.open_streams == 0; }));
}

TEST_CASE("streams above the limit are refused, and a place left is given again") {
  HttpLimits limits;
  limits.max_streams = 2;
  Fixture fixture(limits);
  {
    auto first = fixture.open_stream();
    auto second = fixture.open_stream();
    REQUIRE_FALSE(first.read_through(greeting).empty());
    REQUIRE_FALSE(second.read_through(greeting).empty());
    Client third(fixture.port);
    const auto answer = third.ask(get("/events"));
    CHECK(answer.status == 503);
    CHECK(answer.has("Retry-After: "));
    CHECK(third.ask(get("/hello")).status == 200);  // asking at intervals goes on
  }
  REQUIRE(fixture.comes_true([](const auto& counters) { return counters.open_streams == 0; }));
  CHECK_FALSE(fixture.open_stream().read_through(greeting).empty());
}

TEST_CASE("a reader that stopped reading is dropped, the others miss nothing") {
  Fixture fixture;
  auto dead = fixture.open_stream();
  auto alive = fixture.open_stream();
  REQUIRE_FALSE(dead.read_through(greeting).empty());
  REQUIRE_FALSE(alive.read_through(greeting).empty());
  const std::string data(50000, 'd');
  std::uint64_t id = 0;
  while (fixture.server.counters().dropped_streams == 0 && id < 2000) {
    fixture.server.publish("snapshot", data, ++id);
    const auto text = next_event(alive);
    REQUIRE(text.substr(0, text.find('\n')) == "id: " + std::to_string(id));
  }
  CHECK(fixture.server.counters().dropped_streams == 1);
  CHECK(fixture.comes_true([](const auto& counters) { return counters.open_streams == 1; }));
}

TEST_CASE("a quiet stream is kept alive by comments") {
  HttpLimits limits;
  limits.heartbeat_s = 1;
  Fixture fixture(limits);
  auto client = fixture.open_stream();
  REQUIRE_FALSE(client.read_through(greeting).empty());
  CHECK(client.read_through("\n\n").front() == ':');
}

TEST_CASE(
    "stop ends 200 streams and idle connections at once, lets running requests finish, and refuses new "
    "ones") {
  HttpLimits limits;
  Fixture fixture(limits);
  std::vector<Client> streams;
  for (int i = 0; i < 200; ++i) streams.push_back(fixture.open_stream());
  for (auto& stream : streams) REQUIRE_FALSE(stream.read_through(greeting).empty());
  std::vector<Client> idle;
  for (int i = 0; i < 20; ++i) {
    idle.emplace_back(fixture.port);
    REQUIRE(idle.back().ask(get("/hello")).status == 200);
  }
  Client running(fixture.port);
  running.send(get("/slow"));
  while (!fixture.running) std::this_thread::sleep_for(std::chrono::milliseconds(1));
  CHECK(seconds_of([&] { fixture.server.stop(); }) < 5.0);  // seconds at most: a bound, not a figure of speed
  CHECK(running.read_answer().body == "done");
  for (auto& stream : streams) CHECK(stream.ended());
  for (auto& client : idle) CHECK(client.ended());
  CHECK_FALSE(Client(fixture.port).connected());
  fixture.server.stop();
  fixture.server.publish("late", "", 1);  // of no effect
  CHECK(fixture.server.counters().open_streams == 0);
  CHECK(fixture.server.counters().open_connections == 0);
}

TEST_CASE("stop under load is clean: requests, streams, new clients and events keep coming meanwhile") {
  for (int round = 0; round < 3; ++round) {
    Fixture fixture;
    std::atomic<bool> over = false;
    std::atomic<int> answered = 0;
    std::vector<std::thread> threads;
    for (int t = 0; t < 4; ++t) {
      threads.emplace_back([&] {
        while (!over) {
          Client client(fixture.port);
          for (int i = 0; i < 20 && client.ask(get("/hello")).status == 200; ++i) ++answered;
        }
      });
    }
    threads.emplace_back([&] {
      while (!over) {
        auto client = fixture.open_stream();
        client.read_through(greeting);
      }
    });
    threads.emplace_back([&] {
      for (std::uint64_t id = 1; !over; ++id) {
        fixture.server.publish("tick", "data", id);
        std::this_thread::sleep_for(std::chrono::milliseconds(1));
      }
    });
    while (answered < 200) std::this_thread::sleep_for(std::chrono::milliseconds(1));
    CHECK(seconds_of([&] { fixture.server.stop(); }) < 5.0);
    over = true;
    for (auto& thread : threads) thread.join();
  }
}

TEST_CASE("a server that never ran, or was stopped before it ran, ends without trouble") {
  HttpServer server{HttpLimits{}};
  server.stop();
  CHECK(server.start("127.0.0.1", 0) > 0);
  server.stop();
}
