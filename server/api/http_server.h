// The daemon's HTTP front: parsing and routing by cpp-httplib, everything a hostile or slow client can
// do bounded by our own connection loop. Handlers run on worker threads and must be thread-safe; a
// handler may throw Problem. SSE streams never occupy a worker: they live on one epoll thread.
#pragma once

#include <cstdint>
#include <functional>
#include <map>
#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace hearthfront::server {

// One request as a handler sees it. Header names are lower case; query values are decoded UTF-8.
struct Request {
  std::string method;
  std::string path;
  std::map<std::string, std::string> query;
  std::map<std::string, std::string> headers;
  std::vector<std::string> path_parameters;  // in the order of the {} places of the route
  std::string body;
  std::string remote_address;
};

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
  int threads = 16;
  int max_connections = 1024;
  int max_connections_per_address = 256;
  int max_streams = 256;
  std::size_t max_body_bytes = 8u << 20;
  std::size_t max_head_bytes = 16u << 10;
  int request_timeout_s = 15;  // for the whole request, not for one read
  int idle_timeout_s = 60;
  int heartbeat_s = 15;
};

struct HttpCounters {
  std::uint64_t requests = 0;
  std::uint64_t refused_connections = 0;
  std::uint64_t dropped_streams = 0;
  int open_connections = 0;
  int open_streams = 0;
};

class HttpServer {
 public:
  using Handler = std::function<Response(const Request&)>;

  explicit HttpServer(HttpLimits limits);
  ~HttpServer();
  HttpServer(const HttpServer&) = delete;
  HttpServer& operator=(const HttpServer&) = delete;

  // Pattern: literal segments and {} for one segment, e.g. /api/v1/loads/{}/notes. Before start only.
  void route(std::string method, std::string pattern, Handler handler);
  // GET `path` becomes an SSE stream. `greeting` makes the first events for a new client (may be empty).
  void stream(std::string path, std::function<std::string(const Request&)> greeting);
  // Called for requests that match no route; default is a 404 problem.
  void fallback(Handler handler);

  // Binds (fails with a message where the port is taken: no port sharing) and serves on own threads.
  // Port 0 takes a free one. Returns the port. Throws std::runtime_error with advice.
  int start(const std::string& address, int port);
  // Refuses new work, ends streams, lets running requests finish, joins all threads; seconds at most.
  // Safe to call twice and from any thread but a worker.
  void stop();

  // Sends one event to every stream; drops clients whose 256 KiB queue is full. Any thread.
  void publish(std::string_view event, std::string_view data, std::uint64_t id);

  HttpCounters counters() const;
  std::vector<std::pair<std::string, std::string>> routes() const;  // method, pattern: for the API description test

 private:
  class Impl;
  std::unique_ptr<Impl> impl_;
};

}  // namespace hearthfront::server
