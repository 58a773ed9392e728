// The daemon's HTTP front. Our own epoll thread collects each request whole and flushes each answer, so
// that no slow or hostile client ever holds a worker; cpp-httplib only decodes the target and composes
// the answer. Handlers run on worker threads and must be thread-safe; a handler may throw Problem.
// SSE streams live on one epoll thread of their own. Refused input is answered with a small problem.
#pragma once

#include <cstddef>
#include <cstdint>
#include <functional>
#include <map>
#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

namespace hearthfront::server {

// One request as a handler sees it. Header names are lower case, repeated fields joined by ", " (RFC 9110
// 5.3), values not decoded. Path and query are percent-decoded, valid UTF-8 without control characters; a
// path holds no "." or ".." segment. A HEAD request reaches its handler as GET; the body is not sent.
struct Request {
  std::string method;
  std::string path;
  std::map<std::string, std::string> query;
  std::map<std::string, std::string> headers;
  std::vector<std::string> path_parameters;  // in the order of the {} places of the route
  std::string body;
  std::string remote_address;
};

// Header names and values must be plain text on one line, else the client gets a 500 instead. Headers that
// belong to the front (Date, Connection, Content-Length, Transfer-Encoding, Keep-Alive) are left out.
// JSON without a Cache-Control of its own is sent as no-store.
struct Response {
  int status = 200;
  std::string content_type = "application/json";
  std::string body;
  std::vector<std::pair<std::string, std::string>> headers;
};

// An RFC 9457 problem. `type` is the stable last part of /problems/<type>; `field` names the offending
// member as a path such as items[0].steel, or is empty.
struct Problem {
  int status = 400;
  std::string type;
  std::string title;
  std::string detail;
  std::string field;
};
Response problem_response(const Problem& problem);

struct HttpLimits {
  int threads = 16;            // handlers at work at once, 1 or more
  int max_connections = 1024;  // streams not counted, they have their own limit
  int max_connections_per_address = 256;
  int max_streams = 256;
  std::size_t max_body_bytes = 8u << 20;
  // Held for clients: all bodies above 64 KiB together (more is answered 503), and likewise all answers that
  // clients are slow to take (the oldest is given up).
  std::size_t max_buffered_bytes = 64u << 20;
  std::size_t max_head_bytes = 16u << 10;  // request line and headers; the line alone at most half
  // For the whole request, not for one read, and again for the answer; both get a second more for each
  // 256 KiB of body.
  int request_timeout_s = 15;
  int idle_timeout_s = 60;
  int heartbeat_s = 15;
  // Names under which browsers may address the server, beside localhost, loopback addresses and the
  // address a connection came in on. Any other Host is refused, so that no foreign site can rebind a name.
  std::vector<std::string> host_names;
};

struct HttpCounters {
  std::uint64_t requests = 0;             // answered, refusals included
  std::uint64_t refused_connections = 0;  // over one of the connection limits
  std::uint64_t dropped_streams = 0;      // cut by us because the client did not read
  int open_connections = 0;               // streams not counted
  int open_streams = 0;
};

class HttpServer {
 public:
  using Handler = std::function<Response(const Request&)>;

  explicit HttpServer(const HttpLimits& limits);
  ~HttpServer();
  HttpServer(const HttpServer&) = delete;
  HttpServer& operator=(const HttpServer&) = delete;

  // Pattern: literal segments and {} for one segment, e.g. /api/v1/loads/{}/notes; a literal goes before
  // {}. Before start only. Throws std::logic_error for a malformed or repeated pattern.
  void route(std::string method, std::string pattern, Handler handler);
  // GET on a literal path, answered on the connections' own thread: also while every worker waits for a disk.
  // The handler must wait for nothing and take microseconds.
  void route_at_once(std::string path, Handler handler);
  // GET `path` becomes an SSE stream. `greeting` makes the first events for a new client, as SSE text (may
  // be empty, may throw Problem). The client is enrolled before the greeting is made: it misses no event
  // published later, but may get one again that the greeting already contained.
  void stream(std::string path, std::function<std::string(const Request&)> greeting);
  // Called for requests that match no route; default is a 404 problem.
  void fallback(Handler handler);
  // Gets one line for each exception that left a handler (the client only sees a 500). Any thread;
  // default is stderr. Before start only.
  void on_error(std::function<void(std::string_view)> report);

  // Binds (fails with a message where the port is taken: no port sharing) and serves on own threads.
  // Port 0 takes a free one. Returns the port. Throws std::runtime_error with advice. Once only.
  int start(const std::string& address, int port);
  // Refuses new work, ends streams, lets running handlers finish, joins all threads; takes as long as the
  // slowest running handler, and a second at most for clients that do not read their answer.
  // Safe to call twice and from any thread but a worker.
  void stop();

  // Sends one event to every stream; drops clients whose 256 KiB queue is full. Never waits. Any thread.
  void publish(std::string_view event, std::string_view data, std::uint64_t id);

  HttpCounters counters() const;
  std::vector<std::pair<std::string, std::string>> routes()
      const;  // method, pattern: for the API description test

 private:
  class Impl;
  std::unique_ptr<Impl> impl_;
};

}  // namespace hearthfront::server
