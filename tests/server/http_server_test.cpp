// The server over real sockets: what it answers, what it refuses, what it withstands.
#include <doctest/doctest.h>

#include <array>
#include <atomic>
#include <cerrno>
#include <chrono>
#include <cstdio>
#include <mutex>
#include <stdexcept>
#include <thread>
#include <vector>

#include "server/api/http_server.h"
#include "server/http_client.h"

using namespace hearthfront::server;
using http_test::Answer;
using http_test::Client;
using http_test::get;
using http_test::post;

namespace {

struct Fixture {
  explicit Fixture(HttpLimits limits = {}) : server(limits) {
    server.route("GET", "/hello", [](const Request&) {
      return Response{200, "application/json", "{\"a\":1}", {}};
    });
    server.route("POST", "/echo", [](const Request& request) {
      return Response{200, "text/plain", request.body, {}};
    });
    server.route("GET", "/page", [](const Request&) {
      return Response{200, "text/html", std::string(20000, 'x'), {{"ETag", "\"1\""}}};
    });
    server.route("GET", "/long", [](const Request&) {
      return Response{200, "application/json", std::string(3u << 20, 'j'), {}};
    });
    server.route("GET", "/some", [](const Request&) {
      return Response{200, "application/json", std::string(150u << 10, 'j'), {}};
    });
    server.route("GET", "/huge", [](const Request&) {
      return Response{200, "application/json", std::string(16u << 20, 'j'), {}};
    });
    server.route("GET", "/who/{}", [](const Request& request) {
      const auto shown = request.headers.find("remote_addr");
      return Response{200,
                      "text/plain",
                      request.path_parameters[0] + "|" + request.remote_address + "|" +
                          (shown == request.headers.end() ? "" : shown->second) + "|" + request.method,
                      {}};
    });
    server.route("GET", "/throws",
                 [](const Request&) -> Response { throw std::runtime_error("secret\ntext"); });
    server.route("GET", "/refuses", [](const Request&) -> Response {
      throw Problem{409, "load-ended", "The load has ended", "It ended at 10:00.", "load"};
    });
    server.route("GET", "/splits", [](const Request&) {
      return Response{200, "text/plain", "x", {{"X-Name", "a\r\nSet-Cookie: b=c"}}};
    });
    server.route("GET", "/empty", [](const Request&) { return Response{204, "application/json", "", {}}; });
    server.on_error([this](std::string_view line) {
      const std::lock_guard lock(mutex);
      errors.emplace_back(line);
    });
    port = server.start("127.0.0.1", 0);
  }

  Answer ask(const std::string& bytes) { return Client(port).ask(bytes); }

  std::mutex mutex;
  std::vector<std::string> errors;
  HttpServer server;
  int port = 0;
};

}  // namespace

TEST_CASE("an answer carries date, length, no-store and the security headers") {
  Fixture fixture;
  const auto answer = fixture.ask(get("/hello"));
  CHECK(answer.status == 200);
  CHECK(answer.body == "{\"a\":1}");
  for (const char* header :
       {"Date: ", "Content-Length: 7\r\n", "Content-Type: application/json\r\n",
        "Cache-Control: no-store\r\n", "X-Content-Type-Options: nosniff\r\n",
        "Referrer-Policy: no-referrer\r\n",
        "Content-Security-Policy: default-src 'self'; img-src 'self' data:; style-src 'self'; "
        "frame-ancestors 'none'; base-uri 'none'; form-action 'self'\r\n"}) {
    CAPTURE(header);
    CHECK(answer.has(header));
  }
  const auto refused = fixture.ask("nonsense\r\n\r\n");
  CHECK(refused.status == 400);
  CHECK(refused.has("Content-Security-Policy: "));
  CHECK(refused.has("Content-Type: application/problem+json\r\n"));
}

TEST_CASE(
    "unknown paths, wrong methods and HEAD are answered as RFC 9110 sections 9.3.2, 15.5.5 and 15.5.6 ask") {
  Fixture fixture;
  CHECK(fixture.ask(get("/nothing")).status == 404);
  CHECK(fixture.ask(post("/nothing", "{}")).status == 404);
  const auto wrong = fixture.ask(post("/hello", "{}"));
  CHECK(wrong.status == 405);
  CHECK(wrong.has("Allow: GET, HEAD\r\n"));
  CHECK(fixture.ask("BREW /hello HTTP/1.1\r\nHost: localhost\r\n\r\n").status == 405);

  Client client(fixture.port);
  client.send("HEAD /hello HTTP/1.1\r\nHost: localhost\r\n\r\n" + get("/hello"));
  const auto head = client.read_answer(true);
  CHECK(head.status == 200);
  CHECK(head.has("Content-Length: 7\r\n"));
  CHECK(client.read_answer().body == "{\"a\":1}");  // no byte of a body in between
}

TEST_CASE("an answer without content has no length (RFC 9110 section 8.6)") {
  Fixture fixture;
  const auto answer = fixture.ask(get("/empty"));
  CHECK(answer.status == 204);
  CHECK_FALSE(answer.has("Content-Length"));
}

TEST_CASE("an exception becomes a plain 500 and its text goes to the log alone; a Problem is sent as it is") {
  Fixture fixture;
  const auto answer = fixture.ask(get("/throws"));
  CHECK(answer.status == 500);
  CHECK((answer.head + answer.body).find("secret") == std::string::npos);
  {
    const std::lock_guard lock(fixture.mutex);
    CHECK(fixture.errors == std::vector<std::string>{"GET /throws failed: secret text"});
  }
  const auto problem = fixture.ask(get("/refuses"));
  CHECK(problem.status == 409);
  CHECK(problem.body.find("\"type\":\"/problems/load-ended\"") != std::string::npos);
}

TEST_CASE("a header with a line end in it is not sent (RFC 9110 section 5.5)") {
  Fixture fixture;
  const auto answer = fixture.ask(get("/splits"));
  CHECK(answer.status == 500);
  CHECK(answer.head.find("Set-Cookie") == std::string::npos);
}

TEST_CASE("a client cannot put on another address") {
  Fixture fixture;
  CHECK(fixture.ask(get("/who/x%20y", "REMOTE_ADDR: 10.9.9.9\r\n")).body == "x y|127.0.0.1|10.9.9.9|GET");
}

TEST_CASE("pages are compressed where the client offers gzip, JSON never") {
  Fixture fixture;
  const auto page = fixture.ask(get("/page", "Accept-Encoding: br, gzip\r\n"));
  CHECK(page.has("Content-Encoding: gzip\r\n"));
  CHECK(page.has("Vary: Accept-Encoding\r\n"));
  CHECK(page.body.size() < 1000);
  CHECK(fixture.ask(get("/page")).body.size() == 20000);
  CHECK_FALSE(fixture.ask(get("/long", "Accept-Encoding: gzip\r\n")).has("Content-Encoding"));
}

TEST_CASE(
    "ranges are ignored, as RFC 9110 section 14.2 allows: 600 overlapping parts cost one plain answer") {
  Fixture fixture;
  std::string range = "Range: bytes=0-";
  for (int i = 0; i < 600; ++i) range += ",0-";
  const auto answer = fixture.ask(get("/long", range + "\r\n"));
  CHECK(answer.status == 200);
  CHECK(answer.body.size() == 3u << 20);
}

TEST_CASE("requests on one connection are answered in order, also when sent at once") {
  Fixture fixture;
  Client client(fixture.port);
  std::string all;
  for (int i = 0; i < 50; ++i)
    all += get("/who/" + std::to_string(i)) + post("/echo", "body " + std::to_string(i));
  client.send(all);
  for (int i = 0; i < 50; ++i) {
    REQUIRE(client.read_answer().body == std::to_string(i) + "|127.0.0.1||GET");
    REQUIRE(client.read_answer().body == "body " + std::to_string(i));
  }
  CHECK(client.ask(get("/hello", "Connection: close\r\n")).has("Connection: close\r\n"));
  CHECK(client.ended());
  CHECK(fixture.server.counters().requests == 101);
}

TEST_CASE("a client that ends its side after a whole request still gets the answer") {
  Fixture fixture;
  Client client(fixture.port);
  client.send(get("/hello") + get("/hello") + "GET /hel");
  client.end_sending();
  CHECK(client.read_answer().status == 200);
  CHECK(client.read_answer().status == 200);
  CHECK(client.ended());
}

TEST_CASE("a body is refused before it is read, and the client sees why") {
  HttpLimits limits;
  limits.max_body_bytes = 1u << 20;
  Fixture fixture(limits);
  SUBCASE("too large, and never sent") {
    CHECK(fixture.ask("POST /echo HTTP/1.1\r\nHost: localhost\r\nContent-Length: 1048577\r\n\r\n").status ==
          413);
  }
  SUBCASE("too large, and sent regardless") {
    Client client(fixture.port);
    client.send(post("/echo", std::string(4u << 20, 'b')));
    CHECK(client.read_answer().status == 413);
    CHECK(client.ended());
  }
  SUBCASE("chunked, for a path that does not exist") {
    CHECK(
        fixture.ask("POST /none HTTP/1.1\r\nHost: localhost\r\nTransfer-Encoding: chunked\r\n\r\n").status ==
        411);
  }
  SUBCASE("compressed") {
    CHECK(fixture.ask(post("/echo", "xx", "Content-Encoding: gzip\r\n")).status == 415);
  }
  SUBCASE("a GET with a body is not taken for two requests") {
    Client client(fixture.port);
    const std::string hidden = get("/hello");
    client.send(get("/hello", "Content-Length: " + std::to_string(hidden.size()) + "\r\n") + hidden);
    CHECK(client.read_answer().status == 400);
    CHECK(client.ended());
  }
  SUBCASE("of the largest size it is taken") {
    CHECK(fixture.ask(post("/echo", std::string(1u << 20, 'b'))).body.size() == 1u << 20);
  }
}

TEST_CASE("a client that asks first is told to go on (RFC 9110 section 10.1.1)") {
  Fixture fixture;
  Client client(fixture.port);
  client.send("POST /echo HTTP/1.1\r\nHost: localhost\r\nContent-Length: 2\r\nExpect: 100-continue\r\n\r\n");
  CHECK(client.read_through("\r\n\r\n") == "HTTP/1.1 100 Continue\r\n\r\n");
  CHECK(client.ask("hi").body == "hi");
}

TEST_CASE("endless lines and heads are cut off") {
  Fixture fixture;
  CHECK(fixture.ask("GET /" + std::string(1u << 20, 'a')).status == 414);
  std::string headers;
  for (int i = 0; i < 100000; ++i) headers += "X-" + std::to_string(i) + ": 1\r\n";
  CHECK(fixture.ask("GET / HTTP/1.1\r\nHost: localhost\r\n" + headers).status == 431);
}

TEST_CASE("a form is a body like any other, whatever its size and parts") {
  Fixture fixture;
  const std::string form(100000, 'f');
  CHECK(fixture.ask(post("/echo", form, "Content-Type: application/x-www-form-urlencoded\r\n")).body == form);
  CHECK(fixture.ask(post("/echo", form, "Content-Type: multipart/form-data; boundary=x\r\n")).body == form);
}

TEST_CASE("a foreign host or origin is refused") {
  Fixture fixture;
  CHECK(fixture.ask("GET /hello HTTP/1.1\r\nHost: evil.example\r\n\r\n").status == 421);
  CHECK(fixture.ask(post("/echo", "x", "Origin: http://evil.example\r\n")).status == 403);
  const auto port = std::to_string(fixture.port);
  CHECK(fixture
            .ask("POST /echo HTTP/1.1\r\nHost: 127.0.0.1:" + port + "\r\nOrigin: http://127.0.0.1:" + port +
                 "\r\nContent-Length: 1\r\n\r\nx")
            .status == 200);
}

TEST_CASE("slow clients are cut by one deadline for the whole request and hold up nobody") {
  HttpLimits limits;
  limits.threads = 1;
  limits.request_timeout_s = 1;
  Fixture fixture(limits);
  std::vector<Client> slow;
  for (int i = 0; i < 20; ++i) {
    slow.emplace_back(fixture.port);
    slow.back().send("POST /echo HTTP/1.1\r\nHost: localhost\r\nContent-Length: 50\r\n\r\n");
  }
  Client silent(fixture.port);
  Client greedy(fixture.port);  // asks for much and reads nothing
  for (int i = 0; i < 10; ++i) greedy.send(get("/long"));
  int served = 0;
  // A byte at a time: each read in itself is never late.
  for (int i = 0; i < 25; ++i) {
    for (auto& client : slow) client.send("x");
    if (fixture.ask(get("/hello")).status == 200) ++served;
    std::this_thread::sleep_for(std::chrono::milliseconds(100));
  }
  CHECK(served == 25);
  for (auto& client : slow) {
    const auto answer = client.read_answer();
    CHECK(answer.status == 408);
    CHECK(client.ended());
  }
  CHECK(silent.ended());
  // The greedy one too, and those that were told so but keep their end open.
  for (int i = 0; i < 500 && fixture.server.counters().open_connections > 0; ++i) {
    std::this_thread::sleep_for(std::chrono::milliseconds(10));
  }
  CHECK(fixture.server.counters().open_connections == 0);
}

TEST_CASE("connections above the limits are told so and closed") {
  HttpLimits limits;
  SUBCASE("of the server") {
    limits.max_connections = 4;
  }
  SUBCASE("of one address") {
    limits.max_connections_per_address = 4;
  }
  Fixture fixture(limits);
  {
    std::vector<Client> kept;
    for (int i = 0; i < 4; ++i) {
      kept.emplace_back(fixture.port);
      REQUIRE(kept.back().ask(get("/hello")).status == 200);
    }
    Client fifth(fixture.port);
    const auto answer = fifth.ask(get("/hello"));
    CHECK(answer.status == 503);
    CHECK(answer.has("Retry-After: "));
    CHECK(fifth.ended());
    CHECK(kept.front().ask(get("/hello")).status == 200);
    CHECK(fixture.server.counters().refused_connections == 1);
    CHECK(fixture.server.counters().open_connections == 4);
  }
  int status = 0;
  for (int i = 0; i < 100 && status != 200; ++i) {
    std::this_thread::sleep_for(std::chrono::milliseconds(20));
    status = fixture.ask(get("/hello")).status;
  }
  CHECK(status == 200);  // places are given back
}

TEST_CASE("many large bodies at once are bounded together, small ones go on") {
  HttpLimits limits;
  limits.max_buffered_bytes = 3u << 20;
  Fixture fixture(limits);
  const std::string head = "POST /echo HTTP/1.1\r\nHost: localhost\r\nContent-Length: 2097152\r\n\r\n";
  Client first(fixture.port);
  first.send(head + std::string((2u << 20) - 1, 'b'));
  std::this_thread::sleep_for(std::chrono::milliseconds(500));  // all of it is read before the second begins
  Client second(fixture.port);
  second.send(head + std::string((2u << 20) - 1, 'b'));
  CHECK(second.read_answer().status == 503);
  CHECK(fixture.ask(post("/echo", "small")).body == "small");
  CHECK(first.ask("b").body.size() == 2u << 20);
  CHECK(fixture.ask(head + std::string(2u << 20, 'b')).status == 200);
}

TEST_CASE("answers that nobody takes are bounded together, the oldest given up first") {
  HttpLimits limits;
  limits.max_buffered_bytes = 40u << 20;
  Fixture fixture(limits);
  std::vector<Client> greedy;
  for (int i = 0; i < 4; ++i) {
    greedy.emplace_back(fixture.port);
    greedy.back().send(get("/huge"));
  }
  for (int i = 0; i < 3000; ++i) {
    const auto counters = fixture.server.counters();
    if (counters.requests == 4 && counters.open_connections == 2) break;
    std::this_thread::sleep_for(std::chrono::milliseconds(10));
  }
  // Two answers of 16 MiB fit into 40 MiB, three do not.
  CHECK(fixture.server.counters().open_connections == 2);
  CHECK(fixture.ask(get("/hello")).status == 200);
}

TEST_CASE("what needs no worker is answered while every worker waits") {
  HttpLimits limits;
  limits.threads = 2;
  HttpServer server(limits);
  std::atomic<bool> over = false;
  std::atomic<int> waiting = 0;
  server.route("GET", "/waits", [&](const Request&) {
    ++waiting;
    while (!over) std::this_thread::sleep_for(std::chrono::milliseconds(1));
    return Response{200, "text/plain", "waited", {}};
  });
  server.route_at_once("/alive", [](const Request& request) {
    if (request.query.count("throws") != 0) throw std::runtime_error("secret");
    return Response{200, "text/plain", "alive", {}};
  });
  server.on_error([](std::string_view) {});
  const int port = server.start("127.0.0.1", 0);
  std::vector<Client> blocked;
  for (int i = 0; i < 3; ++i) {
    blocked.emplace_back(port);
    blocked.back().send(get("/waits"));
  }
  while (waiting < 2) std::this_thread::sleep_for(std::chrono::milliseconds(1));
  Client client(port);
  client.send(get("/alive") + get("/alive?a=1") + get("/alive?throws") + post("/alive", "x"));
  CHECK(client.read_answer().body == "alive");
  CHECK(client.read_answer().body == "alive");
  CHECK(client.read_answer().status == 500);
  CHECK(Client(port).ask("GET /alive HTTP/1.0\r\n\r\n").has("Connection: close\r\n"));
  over = true;
  CHECK(client.read_answer().status == 405);  // that one took a worker
  for (auto& one : blocked) CHECK(one.read_answer().body == "waited");
  CHECK_THROWS_AS(server.route_at_once("/late", [](const Request&) { return Response{}; }), std::logic_error);
}

TEST_CASE(
    "a client that ended its side but takes no answer keeps its place until it is cut, and is reset then") {
  HttpLimits limits;
  limits.request_timeout_s = 1;
  Fixture fixture(limits);
  Client client(fixture.port);
  client.send(get("/some"));  // the kernel takes it whole, so that nothing waits in the loop
  client.end_sending();
  const auto open_after = [&](int wait_ms) {
    std::this_thread::sleep_for(std::chrono::milliseconds(wait_ms));
    return fixture.server.counters().open_connections;
  };
  CHECK(open_after(300) == 1);
  int open = 1;
  for (int i = 0; i < 100 && open > 0; ++i) open = open_after(100);
  CHECK(open == 0);
  while (client.receive()) {
  }
  CHECK(errno == ECONNRESET);  // so the kernel holds nothing more of it
}

TEST_CASE("64 clients at once each get their own answers") {
  Fixture fixture;
  std::atomic<int> right = 0;
  std::vector<std::thread> clients;
  for (int c = 0; c < 64; ++c) {
    clients.emplace_back([&, c] {
      Client client(fixture.port);
      for (int i = 0; i < 50; ++i) {
        const auto text = std::to_string(c) + "/" + std::to_string(i);
        if (client.ask(post("/echo", text)).body == text) ++right;
      }
    });
  }
  for (auto& client : clients) client.join();
  CHECK(right == 64 * 50);
}

TEST_CASE("a taken port, a foreign address and a wrong port fail with advice") {
  Fixture fixture;
  HttpServer second{HttpLimits{}};
  const auto message = [&](const char* address, int port) {
    try {
      second.start(address, port);
      return std::string();
    } catch (const std::runtime_error& error) {
      return std::string(error.what());
    }
  };
  CHECK(message("127.0.0.1", fixture.port).find("Another program uses this port") != std::string::npos);
  CHECK(message("192.0.2.1", 0).find("no such address") != std::string::npos);  // TEST-NET-1, RFC 5737
  CHECK(message("127.0.0.1", 70000).find("0 to 65535") != std::string::npos);
  CHECK(second.start("127.0.0.1", 0) > 0);  // a failed start leaves no trace
}

TEST_CASE("a common client is understood, large uploads included") {
  Fixture fixture;
  const std::string command =
      "head -c 3000000 /dev/zero | curl -sS -o /dev/null -w '%{http_code} %{size_download}' "
      "--data-binary @- http://localhost:" +
      std::to_string(fixture.port) + "/echo --ipv4 2>&1";
  FILE* pipe = ::popen(command.c_str(), "r");
  REQUIRE(pipe != nullptr);
  std::array<char, 256> text{};
  const auto size = std::fread(text.data(), 1, text.size(), pipe);
  ::pclose(pipe);
  CHECK(std::string(text.data(), size) == "200 3000000");
}
