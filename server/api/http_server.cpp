#include "server/api/http_server.h"

#include <atomic>
#include <cstdio>
#include <exception>
#include <mutex>
#include <set>
#include <stdexcept>

#include "server/api/http_answer.h"
#include "server/api/http_events.h"
#include "server/api/http_guard.h"
#include "server/api/http_loop.h"
#include "server/api/http_router.h"
#include "server/api/http_target.h"
#include "server/api/http_workers.h"

namespace hearthfront::server {
namespace {

Response not_found(const Request& request) {
  return problem_response({404,
                           "not-found",
                           "There is nothing at this address",
                           "No page or resource is at " + request.path + ".",
                           {}});
}

Response not_allowed(const Request& request, const std::string& allowed_methods) {
  Response response = problem_response({405,
                                        "method-not-allowed",
                                        "The address does not take this method",
                                        request.path + " takes " + allowed_methods + ".",
                                        {}});
  response.headers.emplace_back("Allow", allowed_methods);
  return response;
}

Response internal_error() {
  return problem_response({500,
                           "internal-error",
                           "The server failed at this request",
                           "The server's log names the cause. Nothing is known about the outcome.",
                           {}});
}

void report_to_stderr(std::string_view line) {
  std::fprintf(stderr, "%.*s\n", static_cast<int>(line.size()), line.data());
}

HttpLimits checked(const HttpLimits& limits) {
  const bool fits = limits.threads > 0 && limits.max_connections > 0 &&
                    limits.max_connections_per_address > 0 && limits.max_streams >= 0 &&
                    limits.max_head_bytes >= 1024 && limits.request_timeout_s > 0 &&
                    limits.idle_timeout_s > 0 && limits.heartbeat_s > 0;
  if (!fits)
    throw std::logic_error(
        "HTTP limits: counts and times must be positive, a head may have 1024 bytes or more");
  return limits;
}

}  // namespace

class HttpServer::Impl {
 public:
  explicit Impl(const HttpLimits& limits)
      : limits_(checked(limits)),
        guard_(limits.host_names),
        hub_(limits.max_streams, limits.heartbeat_s),
        loop_(limits_, hooks()) {}

  void before_start(const char* what) const {
    if (started_) throw std::logic_error(std::string(what) + " belongs before start()");
  }

  int start(const std::string& address, int port) {
    const std::lock_guard lock(start_or_stop_);
    before_start("another start()");
    auto listener = open_listener(address, port);
    started_ = true;
    workers_.start(limits_.threads);
    hub_.start();
    loop_.start(std::move(listener.socket));
    return listener.port;
  }

  void stop() {
    const std::lock_guard lock(start_or_stop_);
    if (!started_) return;
    // Workers end first: they alone return connections to the loop and clients to the hub.
    loop_.refuse_new();
    workers_.stop();
    hub_.stop();
    loop_.stop();
  }

  const HttpLimits limits_;
  Router router_;
  std::set<std::string, std::less<>> at_once_;  // paths whose handlers need no worker
  HttpServer::Handler fallback_ = not_found;
  std::function<void(std::string_view)> report_ = report_to_stderr;
  std::atomic<std::uint64_t> requests_ = 0;
  const HostGuard guard_;
  const AnswerWriter answers_;
  EventHub hub_;
  WorkerPool workers_;
  ConnectionLoop loop_;

 private:
  ConnectionLoop::Hooks hooks() {
    ConnectionLoop::Hooks hooks;
    hooks.admit = [this](const Connection& connection) {
      guard_.check(connection.head, connection.local_address);
    };
    hooks.work = [this](Connection& connection) {
      if (answered_at_once(connection.head)) return work(connection);
      workers_.post([this, &connection] { work(connection); });
    };
    hooks.last_answer = [this](const Response& response) { return answers_.answer({}, {response, false}); };
    hooks.report = [this](std::string_view line) { report_(line); };
    return hooks;
  }

  struct Outcome {
    Reply reply;
    std::optional<std::uint64_t> stream_place;
    std::string greeting;
  };

  bool answered_at_once(const RequestHead& head) const {
    const auto path = std::string_view(head.target).substr(0, head.target.find('?'));
    return (head.method == "GET" || head.method == "HEAD") && at_once_.count(path) != 0;
  }
  void work(Connection& connection);
  Outcome respond(Request& request, bool head_only);
  Outcome open_stream(const Endpoint& endpoint, const Request& request, bool head_only);
  Outcome fail(const Request& request, const std::exception_ptr& error);

  std::atomic<bool> started_ = false;
  std::mutex start_or_stop_;
};

void HttpServer::Impl::work(Connection& connection) {
  const RequestHead head = std::move(connection.head);
  const AnswerFrame frame{head.method == "HEAD", accepts_gzip(head.header("accept-encoding")),
                          head.keep_alive};
  Request request;
  request.method = frame.head_only ? "GET" : head.method;
  request.remote_address = connection.remote_address;
  request.headers = head.headers;
  request.body = std::move(connection.body);

  Outcome outcome;
  std::string bytes;
  try {
    auto target = decode_target(head.target);
    request.path = std::move(target.path);
    request.query = std::move(target.query);
    outcome = respond(request, frame.head_only);
    bytes = answers_.answer(frame, outcome.reply);
  } catch (...) {
    if (outcome.stream_place) hub_.cancel(*outcome.stream_place);
    outcome = fail(request, std::current_exception());
    bytes = answers_.answer(frame, outcome.reply);
  }
  ++requests_;
  if (outcome.stream_place) {
    bytes += outcome.greeting;
    return hub_.adopt(*outcome.stream_place, loop_.detach(connection), std::move(bytes));
  }
  loop_.finish(connection, std::move(bytes), !frame.keep_alive || outcome.reply.endless);
}

HttpServer::Impl::Outcome HttpServer::Impl::respond(Request& request, bool head_only) {
  auto match = router_.find(request.method, request.path);
  request.path_parameters = std::move(match.parameters);
  if (match.allowed_methods.empty()) return {{fallback_(request), false}, {}, {}};
  if (match.endpoint == nullptr) return {{not_allowed(request, match.allowed_methods), false}, {}, {}};
  if (!match.endpoint->greeting) return {{match.endpoint->handler(request), false}, {}, {}};
  return open_stream(*match.endpoint, request, head_only);
}

HttpServer::Impl::Outcome HttpServer::Impl::open_stream(const Endpoint& endpoint, const Request& request,
                                                        bool head_only) {
  Outcome outcome;
  outcome.reply.endless = true;
  outcome.reply.response.content_type = "text/event-stream";
  // For a proxy in front that would otherwise hold events back until a buffer is full.
  outcome.reply.response.headers.emplace_back("X-Accel-Buffering", "no");
  if (head_only) return outcome;
  outcome.stream_place = hub_.reserve();
  if (!outcome.stream_place) {
    throw Problem{503,
                  "too-many-streams",
                  "Too many live displays are open",
                  "Close one, or ask for the data at intervals instead.",
                  {}};
  }
  try {
    outcome.greeting = "retry: 2000\n\n" + endpoint.greeting(request);
  } catch (...) {
    hub_.cancel(*outcome.stream_place);
    throw;
  }
  return outcome;
}

HttpServer::Impl::Outcome HttpServer::Impl::fail(const Request& request, const std::exception_ptr& error) {
  const auto complain = [&](std::string what) {
    // One line, whatever the exception says.
    for (char& c : what) {
      if (c == '\n' || c == '\r') c = ' ';
    }
    report_(request.method + " " + request.path + " failed: " + what);
    return internal_error();
  };
  try {
    std::rethrow_exception(error);
  } catch (const Problem& problem) {
    return {{problem_response(problem), false}, {}, {}};
  } catch (const std::exception& exception) {
    return {{complain(exception.what()), false}, {}, {}};
  } catch (...) {
    return {{complain("an exception of unknown type"), false}, {}, {}};
  }
}

HttpServer::HttpServer(const HttpLimits& limits) : impl_(std::make_unique<Impl>(limits)) {}

HttpServer::~HttpServer() {
  stop();
}

void HttpServer::route(std::string method, std::string pattern, Handler handler) {
  impl_->before_start("route()");
  impl_->router_.add(std::move(method), std::move(pattern), {std::move(handler), {}});
}

void HttpServer::route_at_once(std::string path, Handler handler) {
  route("GET", path, std::move(handler));
  impl_->at_once_.insert(std::move(path));
}

void HttpServer::stream(std::string path, std::function<std::string(const Request&)> greeting) {
  impl_->before_start("stream()");
  impl_->router_.add("GET", std::move(path), {{}, std::move(greeting)});
}

void HttpServer::fallback(Handler handler) {
  impl_->before_start("fallback()");
  impl_->fallback_ = std::move(handler);
}

void HttpServer::on_error(std::function<void(std::string_view)> report) {
  impl_->before_start("on_error()");
  impl_->report_ = std::move(report);
}

int HttpServer::start(const std::string& address, int port) {
  return impl_->start(address, port);
}

void HttpServer::stop() {
  impl_->stop();
}

void HttpServer::publish(std::string_view event, std::string_view data, std::uint64_t id) {
  impl_->hub_.publish(event, data, id);
}

HttpCounters HttpServer::counters() const {
  HttpCounters counters;
  counters.requests = impl_->requests_ + impl_->loop_.refused_requests();
  counters.refused_connections = impl_->loop_.refused_connections();
  counters.dropped_streams = impl_->hub_.dropped_streams();
  counters.open_connections = impl_->loop_.open_connections();
  counters.open_streams = impl_->hub_.open_streams();
  return counters;
}

std::vector<std::pair<std::string, std::string>> HttpServer::routes() const {
  return impl_->router_.routes();
}

}  // namespace hearthfront::server
