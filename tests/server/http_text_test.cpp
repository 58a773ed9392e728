// Words, heads, targets and routes, without a socket.
#include <doctest/doctest.h>

#include <stdexcept>

#include "server/api/http_answer.h"
#include "server/api/http_events.h"
#include "server/api/http_guard.h"
#include "server/api/http_head.h"
#include "server/api/http_router.h"
#include "server/api/http_target.h"
#include "server/api/http_text.h"

using namespace hearthfront::server;

namespace {

// Status of the refusal, 200 where the head is accepted.
int verdict(const std::string& head) {
  try {
    HeadScanner scanner;
    const HttpLimits limits;
    const auto bytes = scanner.scan(head, limits.max_head_bytes);
    if (bytes == 0) return 0;
    parse_head(std::string_view(head).substr(0, bytes), limits);
    return 200;
  } catch (const Problem& problem) {
    return problem.status;
  }
}

int verdict_with(const std::string& headers, const std::string& line = "POST /a HTTP/1.1") {
  return verdict(line + "\r\nHost: localhost\r\n" + headers + "\r\n");
}

int target_verdict(const std::string& target) {
  try {
    const auto status = verdict("GET " + target + " HTTP/1.1\r\nHost: localhost\r\n\r\n");
    if (status == 200) decode_target(target);
    return status;
  } catch (const Problem& problem) {
    return problem.status;
  }
}

RequestHead head_of(const std::string& text) {
  return parse_head(text, HttpLimits{});
}

}  // namespace

TEST_CASE("a JSON string escapes what RFC 8259 section 7 asks and replaces bytes that are no UTF-8") {
  CHECK(json_quoted("a\"b\\c\n\x01") == "\"a\\\"b\\\\c\\u000a\\u0001\"");
  CHECK(json_quoted("850 \xc2\xb0"
                    "C") ==
        "\"850 \xc2\xb0"
        "C\"");
  CHECK(json_quoted("\xff\xc3") == "\"\xef\xbf\xbd\xef\xbf\xbd\"");
  CHECK(json_quoted("\xed\xa0\x80") ==
        "\"\xef\xbf\xbd\xef\xbf\xbd\xef\xbf\xbd\"");  // surrogate: RFC 3629 section 3
  CHECK_FALSE(is_utf8("\xc0\xaf"));                   // overlong slash: section 10
}

TEST_CASE("a date is written as RFC 9110 section 5.6.7 shows it") {
  CHECK(http_date(784111777) == "Sun, 06 Nov 1994 08:49:37 GMT");  // the section's own example
}

TEST_CASE("a problem carries the members of RFC 9457 section 3.1") {
  const auto response =
      problem_response({422, "bad-reading", "Not stored", "say \"why\"", "readings[0].value"});
  CHECK(response.status == 422);
  CHECK(response.content_type == "application/problem+json");
  CHECK(
      response.body ==
      R"({"type":"/problems/bad-reading","title":"Not stored","status":422,"detail":"say \"why\"","field":"readings[0].value"})");
}

TEST_CASE("a head that two readers could read in two ways is refused (RFC 9112 sections 2.2, 5, 6.3)") {
  CHECK(verdict_with("Content-Length: 3\r\n") == 200);
  CHECK(verdict_with("Content-Length: abc\r\n") == 400);
  CHECK(verdict_with("Content-Length: -1\r\n") == 400);
  CHECK(verdict_with("Content-Length: +1\r\n") == 400);
  CHECK(verdict_with("Content-Length:\r\n") == 400);
  CHECK(verdict_with("Content-Length: 3, 3\r\n") == 400);
  CHECK(verdict_with("Content-Length: 3\r\nContent-Length: 4\r\n") == 400);
  CHECK(verdict_with("Content-Length: 99999999999999999999999\r\n") == 413);
  CHECK(verdict_with("Transfer-Encoding: chunked\r\n") == 411);
  CHECK(verdict_with("Transfer-Encoding: chunked\r\nContent-Length: 3\r\n") == 411);
  CHECK(verdict_with("Content-Encoding: gzip\r\n") == 415);
  CHECK(verdict_with("Content-Length: 3\r\n", "GET /a HTTP/1.1") == 400);
  CHECK(verdict_with("Content-Length: 3\r\n", "HEAD /a HTTP/1.1") == 400);
  CHECK(verdict_with("X : 1\r\n") == 400);
  CHECK(verdict_with("X: 1\r\n folded\r\n") == 400);
  CHECK(verdict_with("X: a\rb\r\n") == 400);
  CHECK(verdict_with(std::string("X: a\0b\r\n", 8)) == 400);
  CHECK(verdict_with("Host: other\r\n") == 400);
  CHECK(verdict("GET / HTTP/1.1\r\n\r\n") == 400);                  // RFC 9112 section 3.2: Host is required
  CHECK(verdict("GET http://localhost/ HTTP/1.1\r\n\r\n") == 400);  // in absolute form as well
  CHECK(verdict("GET / HTTP/1.0\r\n\r\n") == 200);
  CHECK(verdict("GET / HTTP/1.1\nHost: localhost\n\n") == 400);
  CHECK(verdict("GET / HTTP/2.0\r\nHost: localhost\r\n\r\n") == 400);
  CHECK(verdict("GET /\r\nHost: localhost\r\n\r\n") == 400);
  CHECK(verdict("GET  / HTTP/1.1\r\nHost: localhost\r\n\r\n") == 400);
  CHECK(verdict("\x16\x03\x01") == 400);  // a TLS hello (RFC 8446 section 5.1)
  CHECK(verdict("\r\nGET / HTTP/1.1\r\nHost: localhost\r\n\r\n") == 200);
}

TEST_CASE(
    "a head is bounded: line 8 KiB, all 16 KiB, 100 headers (our own limits; statuses of RFC 9110, RFC "
    "6585)") {
  CHECK(verdict("GET /" + std::string(9000, 'a')) == 414);
  CHECK(verdict_with("X: " + std::string(17000, 'a') + "\r\n") == 431);
  std::string many;
  for (int i = 0; i < 101; ++i) many += "X: 1\r\n";
  CHECK(verdict_with(many) == 431);
}

TEST_CASE("a head split anywhere is found at the same place") {
  const std::string text = "POST /a HTTP/1.1\r\nHost: localhost\r\nContent-Length: 2\r\n\r\nhi";
  HeadScanner scanner;
  for (std::size_t size = 1; size < text.size() - 2; ++size) {
    REQUIRE(scanner.scan(std::string_view(text).substr(0, size), 16384) == 0);
  }
  CHECK(scanner.scan(text, 16384) == text.size() - 2);
}

TEST_CASE("header values arrive as sent: not percent-decoded, joined where repeated (RFC 9110 section 5.3)") {
  const auto head = head_of("GET / HTTP/1.1\r\nHost: localhost\r\nX-A: %0D%0Aq\r\nx-a:  two\t\r\n\r\n");
  CHECK(head.headers.at("x-a") == "%0D%0Aq, two");
}

TEST_CASE("a connection stays open by default in HTTP/1.1 and closes in HTTP/1.0 (RFC 9112 section 9.3)") {
  CHECK(head_of("GET / HTTP/1.1\r\nHost: a\r\n\r\n").keep_alive);
  CHECK_FALSE(head_of("GET / HTTP/1.1\r\nHost: a\r\nConnection: x, Close\r\n\r\n").keep_alive);
  CHECK_FALSE(head_of("GET / HTTP/1.0\r\n\r\n").keep_alive);
}

TEST_CASE("the absolute form stands for host and path (RFC 9112 section 3.2.2)") {
  const auto head = head_of("GET http://shop.example:80/a?b=1 HTTP/1.1\r\nHost: other\r\n\r\n");
  CHECK(head.headers.at("host") == "shop.example:80");
  CHECK(head.target == "/a?b=1");
}

TEST_CASE("a target is decoded once and only where it has one meaning") {
  const auto target =
      decode_target("/loads/a%20b+c?from=2026-01-01T00%3A00%3A00Z&note=%C2%B0C+x&e=a=b?c&flag");
  CHECK(target.path == "/loads/a b+c");
  CHECK(target.query.at("from") == "2026-01-01T00:00:00Z");
  CHECK(target.query.at("note") ==
        "\xc2\xb0"
        "C x");
  CHECK(target.query.at("e") == "a=b?c");
  CHECK(target.query.at("flag").empty());
  CHECK(decode_target("/%2541").path == "/%41");
  for (const char* bad :
       {"/a/../b", "/%2e%2e/b", "/a%2fb", "/a%5Cb", "/a%00", "/%zz", "/%u002f", "/%", "/a#b", "/%ff",
        "/a%0d%0ab", "/?a=1&a=2", "/?a=%0a", "/?%00=1", "*", "a", "/a\\b"}) {
    CAPTURE(bad);
    CHECK(target_verdict(bad) == 400);
  }
}

TEST_CASE("routes match whole segments, a literal before a place, and tell the methods of a known path") {
  Router router;
  const auto handler = [](const Request&) { return Response{}; };
  router.add("GET", "/api/v1/loads", {handler, {}});
  router.add("GET", "/api/v1/loads/{}", {handler, {}});
  router.add("DELETE", "/api/v1/loads/{}", {handler, {}});
  router.add("GET", "/api/v1/loads/open", {handler, {}});
  router.add("POST", "/api/v1/loads/{}/notes/{}", {handler, {}});
  CHECK(router.find("GET", "/api/v1/loads").endpoint != nullptr);
  CHECK(router.find("HEAD", "/api/v1/loads").endpoint == router.find("GET", "/api/v1/loads").endpoint);
  CHECK(router.find("GET", "/api/v1/loads/open").parameters.empty());
  CHECK(router.find("GET", "/api/v1/loads/7").parameters == std::vector<std::string>{"7"});
  CHECK(router.find("POST", "/api/v1/loads/open/notes/3").parameters ==
        std::vector<std::string>{"open", "3"});
  CHECK(router.find("PUT", "/api/v1/loads/7").endpoint == nullptr);
  CHECK(router.find("PUT", "/api/v1/loads/7").allowed_methods == "DELETE, GET, HEAD");
  for (const char* unknown :
       {"", "/", "/api", "/api/v1/loads/", "/api/v1/loads//notes/3", "/api/v1/loads/7/notes"}) {
    CAPTURE(unknown);
    CHECK(router.find("GET", unknown).allowed_methods.empty());
  }
  CHECK_THROWS_AS(router.add("GET", "/api/v1/loads", {handler, {}}), std::logic_error);
  CHECK_THROWS_AS(router.add("GET", "/a{}", {handler, {}}), std::logic_error);
  CHECK_THROWS_AS(router.add("GET", "a", {handler, {}}), std::logic_error);
}

TEST_CASE("only names of this server are taken as Host, only its own pages may change things") {
  const HostGuard guard({"Furnace.Plant.example"});
  const auto verdict_of = [&](const std::string& method, const std::string& host,
                              const std::string& more = {}) {
    try {
      guard.check(head_of(method + " / HTTP/1.1\r\nHost: " + host + "\r\n" + more + "\r\n"), "192.0.2.7");
      return 200;
    } catch (const Problem& problem) {
      return problem.status;
    }
  };
  for (const char* known : {"localhost", "LOCALHOST:8080", "127.0.0.1:1", "127.8.9.1", "[::1]:80",
                            "192.0.2.7", "furnace.plant.example:443", "localhost."}) {
    CAPTURE(known);
    CHECK(verdict_of("GET", known) == 200);
  }
  for (const char* foreign : {"evil.example", "localhost.evil.example", "127.0.0.1.evil.example", "192.0.2.8",
                              "[::1", "localhost:80:80", "localhost:x", "", "localhost@evil.example"}) {
    CAPTURE(foreign);
    CHECK(verdict_of("GET", foreign) == 421);
  }
  CHECK(verdict_of("POST", "localhost:80", "Origin: http://localhost:80\r\n") == 200);
  CHECK(verdict_of("POST", "127.0.0.1:80", "Origin: https://furnace.plant.example\r\n") == 200);
  CHECK(verdict_of("POST", "localhost:80") == 200);  // gateways send no Origin
  for (const char* origin : {"http://evil.example", "http://localhost:81", "null", "", "http://"}) {
    CAPTURE(origin);
    for (const char* method : {"POST", "PUT", "PATCH", "DELETE"}) {
      CHECK(verdict_of(method, "localhost:80", std::string("Origin: ") + origin + "\r\n") == 403);
    }
    CHECK(verdict_of("GET", "localhost:80", std::string("Origin: ") + origin + "\r\n") == 200);
  }
  // W3C Fetch Metadata Request Headers, section 2.3: the values of Sec-Fetch-Site.
  for (const char* site : {"cross-site", "same-site", "x"}) {
    CAPTURE(site);
    CHECK(verdict_of("POST", "localhost", std::string("Sec-Fetch-Site: ") + site + "\r\n") == 403);
    CHECK(verdict_of("GET", "localhost", std::string("Sec-Fetch-Site: ") + site + "\r\n") == 200);
  }
  for (const char* site : {"same-origin", "none"}) {
    CHECK(verdict_of("POST", "localhost", std::string("Sec-Fetch-Site: ") + site + "\r\n") == 200);
  }
}

TEST_CASE("gzip is taken only where the client offers it (RFC 9110 section 12.5.3)") {
  CHECK(accepts_gzip("br, gzip;q=0.8"));
  CHECK(accepts_gzip("GZIP"));
  CHECK_FALSE(accepts_gzip("gzip;q=0"));
  CHECK_FALSE(accepts_gzip("gzip;q=0.000, br"));
  CHECK_FALSE(accepts_gzip(""));
}

TEST_CASE("an event is one block of lines (WHATWG HTML, server-sent events, section 9.2.6)") {
  CHECK(event_text("load", "{\"a\":1}", 7) == "id: 7\nevent: load\ndata: {\"a\":1}\n\n");
  CHECK(event_text("a\nevil: 1", "x\r\ny\rz\n", 8) ==
        "id: 8\nevent: aevil: 1\ndata: x\ndata: y\ndata: z\ndata: \n\n");
}
