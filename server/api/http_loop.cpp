#include "server/api/http_loop.h"

#include <sys/epoll.h>
#include <sys/socket.h>

#include <algorithm>
#include <array>
#include <cerrno>
#include <stdexcept>
#include <system_error>
#include <utility>

namespace hearthfront::server {
namespace {

using std::chrono::milliseconds;
using std::chrono::seconds;

constexpr std::uint64_t listener_key = 1;
constexpr auto sweep_every = milliseconds(250);
constexpr auto ending_limit = seconds(1);
constexpr auto ending_unread_limit = milliseconds(200);
constexpr auto accept_pause = milliseconds(100);  // where the system has no descriptors left
constexpr std::size_t scratch_bytes = 64u << 10;
constexpr auto report_pause = std::chrono::minutes(1);
constexpr int max_uncounted = 64;

}  // namespace

ConnectionLoop::ConnectionLoop(const HttpLimits& limits, Hooks hooks)
    : limits_(limits), hooks_(std::move(hooks)), scratch_(scratch_bytes) {}

ConnectionLoop::~ConnectionLoop() {
  stop();
}

void ConnectionLoop::start(Descriptor listener) {
  listener_ = std::move(listener);
  poller_.add(listener_.get(), EPOLLIN, listener_key);
  thread_ = std::thread([this] { run(); });
}

void ConnectionLoop::refuse_new() {
  phase_ = Phase::refusing;
  poller_.wake();
}

void ConnectionLoop::stop() {
  phase_ = Phase::ending;
  poller_.wake();
  if (thread_.joinable()) thread_.join();
}

void ConnectionLoop::run() {
  std::array<epoll_event, 128> events{};
  auto next_sweep = std::chrono::steady_clock::now();
  std::optional<Moment> end;
  while (true) {
    // Without connections there is nothing to time: an idle daemon then sleeps.
    const bool asleep =
        open_connections_ == 0 && uncounted_ == 0 && accept_again_ == Moment{} && phase_ == Phase::serving;
    const int timeout_ms = asleep ? -1 : phase_ == Phase::ending ? 10 : static_cast<int>(sweep_every.count());
    const int count = epoll_wait(poller_.get(), events.data(), static_cast<int>(events.size()), timeout_ms);
    const auto now = std::chrono::steady_clock::now();
    for (int i = 0; i < count; ++i) {
      const auto& event = events.at(static_cast<std::size_t>(i));
      if (event.data.u64 == Poller::wake_key) {
        poller_.clear_wake();
      } else if (event.data.u64 == listener_key) {
        accept_waiting(now);
      } else {
        serve(event.data.u64, event.events, now);
      }
    }
    give_up_unsent();
    if (now >= next_sweep) {
      sweep(now);
      next_sweep = now + sweep_every;
    }
    if (phase_ == Phase::serving) continue;
    listener_.reset();
    leave_idle_connections();
    if (phase_ != Phase::ending) continue;
    if (!end) end = now + ending_limit;
    const bool unread_too = now < *end - ending_limit + ending_unread_limit;
    if (now >= *end || !answers_pending(unread_too)) break;
  }
  const std::lock_guard lock(mutex_);
  for (const auto& [key, connection] : connections_) {
    if (connection->state == Connection::State::flushing) discard_untaken(connection->socket.get());
  }
  connections_.clear();
  open_connections_ = 0;
}

void ConnectionLoop::serve(std::uint64_t key, std::uint32_t events, Moment now) {
  Connection* connection = nullptr;
  {
    const std::lock_guard lock(mutex_);
    const auto found = connections_.find(key);
    if (found == connections_.end() || found->second->state == Connection::State::working) return;
    connection = found->second.get();
  }
  switch (connection->state) {
    case Connection::State::collecting:
      // Writability was asked for only because a pipelined request waits in the buffer.
      if ((events & EPOLLOUT) != 0 && !connection->input.empty())
        return static_cast<void>(advance(*connection, now));
      return collect(*connection, now);
    case Connection::State::flushing:
      return flush(*connection, now);
    case Connection::State::draining:
      return drain(*connection, now);
    case Connection::State::working:
      return;
  }
}

void ConnectionLoop::accept_waiting(Moment now) {
  if (!listener_) return;
  while (true) {
    Descriptor socket(::accept4(listener_.get(), nullptr, nullptr, SOCK_NONBLOCK | SOCK_CLOEXEC));
    if (socket) {
      admit_socket(std::move(socket), now);
      continue;
    }
    if (errno == EINTR || errno == ECONNABORTED || errno == EPROTO) continue;
    if (errno != EAGAIN && errno != EWOULDBLOCK) pause_accepting(errno, now);
    return;
  }
}

// EMFILE, ENFILE, ENOBUFS, ENOMEM: the waiting client stays in the backlog; trying again at once would only
// burn a core.
void ConnectionLoop::pause_accepting(int error, Moment now) {
  poller_.change(listener_.get(), 0, listener_key);
  accept_again_ = now + accept_pause;
  if (now < report_again_) return;
  report_again_ = now + report_pause;
  hooks_.report("no further connection can be taken: " + std::generic_category().message(error) +
                ". Raise the limit of open files of this service.");
}

// Answers cost memory while their clients are slow to take them; the one due first goes first.
void ConnectionLoop::give_up_unsent() {
  while (unsent_bytes_ > limits_.max_buffered_bytes) {
    const std::lock_guard lock(mutex_);
    Connection* oldest = nullptr;
    for (const auto& [key, connection] : connections_) {
      if (connection->state == Connection::State::flushing &&
          (oldest == nullptr || connection->deadline < oldest->deadline)) {
        oldest = connection.get();
      }
    }
    if (oldest == nullptr) return;
    discard_untaken(oldest->socket.get());
    forget(*oldest);
  }
}

void ConnectionLoop::admit_socket(Descriptor socket, Moment now) {
  tune_connection(socket.get());
  auto connection = std::make_unique<Connection>();
  connection->remote_address = remote_address_of(socket.get());
  connection->local_address = local_address_of(socket.get());
  connection->socket = std::move(socket);
  connection->deadline = now + seconds(limits_.request_timeout_s);
  connection->key = next_key_++;
  Connection& added = *connection;

  bool full = false;
  {
    const std::lock_guard lock(mutex_);
    const auto found = per_address_.find(added.remote_address);
    full = open_connections_ >= limits_.max_connections;
    added.counted =
        !full && (found == per_address_.end() || found->second < limits_.max_connections_per_address);
    if (!added.counted) ++refused_connections_;
    if (!added.counted && uncounted_ >= max_uncounted) return;
    try {
      poller_.add(added.socket.get(), EPOLLIN | EPOLLONESHOT, added.key);
    } catch (const std::runtime_error&) {
      return;
    }
    connections_.emplace(added.key, std::move(connection));
    if (added.counted) {
      ++per_address_[added.remote_address];
      ++open_connections_;
    } else {
      ++uncounted_;
    }
  }
  if (!added.counted) tell_busy(added, full);
}

void ConnectionLoop::tell_busy(Connection& connection, bool full) {
  const Response busy =
      problem_response({503,
                        "too-many-connections",
                        "Too many connections",
                        full ? "The server holds as many connections as it may. Try again shortly."
                             : "This address holds as many connections as it may.",
                        {}});
  connection.output = hooks_.last_answer(busy);
  connection.close_after = true;
  connection.state = Connection::State::flushing;
  poller_.change(connection.socket.get(), EPOLLOUT | EPOLLONESHOT, connection.key);
}

void ConnectionLoop::cut(Connection& connection) {
  discard_untaken(connection.socket.get());
  close(connection);
}

void ConnectionLoop::close(Connection& connection) {
  const std::lock_guard lock(mutex_);
  forget(connection);
}

void ConnectionLoop::forget(Connection& connection) {
  release_charge(connection);
  if (!connection.counted) {
    --uncounted_;
  } else {
    --open_connections_;
    const auto found = per_address_.find(connection.remote_address);
    if (found != per_address_.end() && --found->second <= 0) per_address_.erase(found);
  }
  connections_.erase(connection.key);
}

void ConnectionLoop::leave_idle_connections() {
  const std::lock_guard lock(mutex_);
  std::vector<Connection*> idle;
  for (const auto& [key, connection] : connections_) {
    if (connection->state == Connection::State::collecting) idle.push_back(connection.get());
  }
  for (Connection* connection : idle) forget(*connection);
}

bool ConnectionLoop::answers_pending(bool unread_too) {
  const std::lock_guard lock(mutex_);
  return std::any_of(connections_.begin(), connections_.end(), [&](const auto& entry) {
    const auto state = entry.second->state;
    return state == Connection::State::flushing || (unread_too && state == Connection::State::draining);
  });
}

void ConnectionLoop::sweep(Moment now) {
  if (accept_again_ != Moment{} && now >= accept_again_ && listener_) {
    accept_again_ = {};
    poller_.change(listener_.get(), EPOLLIN, listener_key);
  }
  std::vector<Connection*> late;
  {
    const std::lock_guard lock(mutex_);
    for (const auto& [key, connection] : connections_) {
      if (connection->state != Connection::State::working && connection->deadline <= now) {
        late.push_back(connection.get());
      }
    }
  }
  // Only this thread takes connections out that no worker holds, so the pointers stay good.
  for (Connection* connection : late) {
    if (connection->state == Connection::State::flushing) {
      cut(*connection);
    } else if (connection->state == Connection::State::draining || connection->input.empty()) {
      leave(*connection, now);
    } else {
      refuse(*connection,
             {408,
              "request-too-slow",
              "The request took too long",
              "A request must be here within " + std::to_string(limits_.request_timeout_s) + " seconds.",
              {}},
             now);
    }
  }
}

}  // namespace hearthfront::server
