// The life of one request inside the connection loop: bytes in, worker, bytes out, close or wait again.
// Same thread rule as http_loop.h; only finish() and detach() are called by workers.
#include <sys/epoll.h>
#include <sys/socket.h>

#include <algorithm>
#include <cerrno>
#include <utility>

#include "server/api/http_loop.h"

namespace hearthfront::server {
namespace {

using std::chrono::seconds;

constexpr auto linger = seconds(2);
constexpr std::size_t max_drained_bytes = 32u << 20;
constexpr std::size_t small_body_bytes = 64u << 10;
constexpr std::size_t kept_buffer_bytes = 64u << 10;
constexpr std::size_t slowest_bytes_per_s = 256u << 10;  // counts beside the request's own time
constexpr int reads_per_turn = 1;  // of 64 KiB; then others get their turn, or many large bodies hold up all

void shrink(std::string& buffer) {
  if (buffer.capacity() > kept_buffer_bytes) buffer.shrink_to_fit();
}

}  // namespace

void ConnectionLoop::collect(Connection& connection, Moment now) {
  const bool fresh = connection.input.empty();
  bool ended = false;
  for (int turn = 0; turn < reads_per_turn; ++turn) {
    const auto count = ::recv(connection.socket.get(), scratch_.data(), scratch_.size(), 0);
    if (count < 0 && errno == EINTR) continue;
    if (count < 0 && (errno == EAGAIN || errno == EWOULDBLOCK)) break;
    if (count <= 0) {
      ended = true;
      break;
    }
    connection.input.append(scratch_.data(), static_cast<std::size_t>(count));
    // Above that much, look before reading on: it may be a body that is refused.
    if (static_cast<std::size_t>(count) < scratch_.size() || connection.head_bytes == 0) break;
  }
  if (ended && connection.input.empty()) return leave(connection, now);
  if (fresh && !connection.input.empty()) connection.deadline = now + seconds(limits_.request_timeout_s);
  // A client that closed its side may still wait for the answer to a whole request; with less than that
  // nothing can come any more.
  if (advance(connection, now) && ended) leave(connection, now);
}

bool ConnectionLoop::advance(Connection& connection, Moment now) {
  try {
    if (!take_head(connection)) return true;
    const auto length = connection.head.content_length;
    charge_body(connection);
    if (connection.input.size() - connection.head_bytes < length) {
      if (connection.head.expects_continue && !connection.continue_sent) {
        connection.continue_sent = true;
        std::size_t sent = 0;
        send_some(connection.socket.get(), "HTTP/1.1 100 Continue\r\n\r\n", sent);
      }
      poller_.change(connection.socket.get(), EPOLLIN | EPOLLONESHOT, connection.key);
      return true;
    }
    connection.input.erase(0, connection.head_bytes);
    if (connection.input.size() == length) {
      connection.body = std::exchange(connection.input, {});
    } else {
      connection.body = connection.input.substr(0, length);
      connection.input.erase(0, length);
    }
  } catch (const Problem& problem) {
    refuse(connection, problem, now);
    return false;
  }
  {
    const std::lock_guard lock(mutex_);
    connection.state = Connection::State::working;
  }
  hooks_.work(connection);
  return false;
}

bool ConnectionLoop::take_head(Connection& connection) {
  if (connection.head_bytes != 0) return true;
  connection.head_bytes = connection.scanner.scan(connection.input, limits_.max_head_bytes);
  if (connection.head_bytes == 0) {
    poller_.change(connection.socket.get(), EPOLLIN | EPOLLONESHOT, connection.key);
    return false;
  }
  connection.head = parse_head(std::string_view(connection.input).substr(0, connection.head_bytes), limits_);
  hooks_.admit(connection);
  connection.deadline += seconds(connection.head.content_length / slowest_bytes_per_s);
  return true;
}

// One that takes nothing is cut before one that is slow with much.
void ConnectionLoop::set_flush_deadline(Connection& connection, Moment now) const {
  connection.deadline = std::min(connection.cut_at, now + seconds(limits_.request_timeout_s));
}

void ConnectionLoop::charge_body(Connection& connection) {
  if (connection.head.content_length <= small_body_bytes) return;
  const auto held = std::min(connection.input.size() - connection.head_bytes, connection.head.content_length);
  charged_bytes_ += held - connection.charged_bytes;
  connection.charged_bytes = held;
  if (charged_bytes_ > limits_.max_buffered_bytes) {
    throw Problem{
        503, "busy", "Too much is being sent at once", "Try again shortly, or send smaller parts.", {}};
  }
}

void ConnectionLoop::release_charge(Connection& connection) {
  charged_bytes_ -= std::exchange(connection.charged_bytes, 0);
  unsent_bytes_ -= std::exchange(connection.unsent_bytes, 0);
}

void ConnectionLoop::refuse(Connection& connection, const Problem& problem, Moment now) {
  ++refused_requests_;
  release_charge(connection);
  connection.input.clear();
  shrink(connection.input);
  connection.output = hooks_.last_answer(problem_response(problem));
  connection.sent_bytes = 0;
  connection.close_after = true;
  connection.state = Connection::State::flushing;
  connection.deadline = connection.cut_at = now + seconds(limits_.request_timeout_s);
  flush(connection, now);
}

void ConnectionLoop::flush(Connection& connection, Moment now) {
  const auto before = connection.sent_bytes;
  if (!send_some(connection.socket.get(), connection.output, connection.sent_bytes)) return close(connection);
  if (connection.sent_bytes < connection.output.size()) {
    if (connection.sent_bytes > before) set_flush_deadline(connection, now);
    return poller_.change(connection.socket.get(), EPOLLOUT | EPOLLONESHOT, connection.key);
  }
  release_charge(connection);
  connection.output.clear();
  shrink(connection.output);
  if (connection.close_after) return start_draining(connection, now);
  wait_for_request(connection, now);
}

void ConnectionLoop::start_draining(Connection& connection, Moment now) {
  ::shutdown(connection.socket.get(), SHUT_WR);
  connection.state = Connection::State::draining;
  connection.deadline = now + linger;
  connection.cut_at = now + seconds(limits_.request_timeout_s);
  poller_.change(connection.socket.get(), EPOLLIN | EPOLLONESHOT, connection.key);
}

void ConnectionLoop::drain(Connection& connection, Moment now) {
  for (int turn = 0; turn < reads_per_turn; ++turn) {
    const auto count = ::recv(connection.socket.get(), scratch_.data(), scratch_.size(), 0);
    if (count < 0 && (errno == EAGAIN || errno == EWOULDBLOCK)) break;
    if (count <= 0) return leave(connection, now);
    connection.drained_bytes += static_cast<std::size_t>(count);
    if (connection.drained_bytes > max_drained_bytes) return close(connection);
  }
  poller_.change(connection.socket.get(), EPOLLIN | EPOLLONESHOT, connection.key);
}

// A socket closed before the client took its answer would live on in the kernel with all that memory, beyond
// every limit. So the connection keeps its place; the sweep alone looks at it again, since a client that has
// ended its side would wake the loop without end.
void ConnectionLoop::leave(Connection& connection, Moment now) {
  if (!has_untaken(connection.socket.get())) return close(connection);
  if (connection.state != Connection::State::draining) return start_draining(connection, now);
  if (now >= connection.cut_at) cut(connection);
}

void ConnectionLoop::wait_for_request(Connection& connection, Moment now) {
  connection.state = Connection::State::collecting;
  connection.scanner = {};
  connection.head_bytes = 0;
  connection.continue_sent = false;
  const bool more_here = !connection.input.empty();
  connection.deadline = now + seconds(more_here ? limits_.request_timeout_s : limits_.idle_timeout_s);
  // A free socket is writable at once: that brings a pipelined request its turn, after the others.
  poller_.change(connection.socket.get(), (more_here ? EPOLLOUT : EPOLLIN) | EPOLLONESHOT, connection.key);
}

void ConnectionLoop::finish(Connection& connection, std::string bytes, bool close_after) {
  release_charge(connection);
  connection.body.clear();
  shrink(connection.body);
  connection.sent_bytes = 0;
  const bool sound = send_some(connection.socket.get(), bytes, connection.sent_bytes);
  const auto now = std::chrono::steady_clock::now();
  const std::lock_guard lock(mutex_);
  connection.close_after = close_after || !sound || phase_ != Phase::serving;
  if (sound && connection.sent_bytes == bytes.size()) {
    if (!connection.close_after) return wait_for_request(connection, now);
    return start_draining(connection, now);
  }
  // A broken connection takes this way too: the loop finds it broken again and closes it.
  connection.output = std::move(bytes);
  connection.state = Connection::State::flushing;
  connection.cut_at =
      now + seconds(limits_.request_timeout_s) + seconds(connection.output.size() / slowest_bytes_per_s);
  set_flush_deadline(connection, now);
  connection.unsent_bytes = connection.output.size();
  unsent_bytes_ += connection.unsent_bytes;
  if (unsent_bytes_ > limits_.max_buffered_bytes) poller_.wake();
  poller_.change(connection.socket.get(), EPOLLOUT | EPOLLONESHOT, connection.key);
}

Descriptor ConnectionLoop::detach(Connection& connection) {
  const std::lock_guard lock(mutex_);
  poller_.remove(connection.socket.get());
  Descriptor socket = std::move(connection.socket);
  forget(connection);
  return socket;
}

}  // namespace hearthfront::server
