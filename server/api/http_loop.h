// One epoll thread that owns all connections: accepts, collects whole requests, hands each to a worker,
// flushes answers, waits on idle ones, and cuts whatever exceeds a limit. No worker ever waits for a
// client. Everything but finish(), detach() and the counters belongs to that thread; a connection that is
// with a worker is not touched by it. Failure of one connection closes that connection only.
#pragma once

#include <atomic>
#include <chrono>
#include <cstddef>
#include <cstdint>
#include <functional>
#include <memory>
#include <mutex>
#include <optional>
#include <string>
#include <string_view>
#include <thread>
#include <unordered_map>
#include <vector>

#include "server/api/http_head.h"
#include "server/api/http_server.h"
#include "server/api/http_socket.h"

namespace hearthfront::server {

using Moment = std::chrono::steady_clock::time_point;

struct Connection {
  enum class State {
    collecting,  // idle, or part of a request is here
    working,     // with a worker, watched by nobody
    flushing,    // part of the answer is still to be sent
    draining  // answered and closed on our side; input is thrown away so that no reset eats the answer, and
              // the place is kept while the kernel holds bytes of it
  };

  std::uint64_t key = 0;
  Descriptor socket;
  std::string remote_address;
  std::string local_address;
  State state = State::collecting;
  Moment deadline;
  Moment cut_at;  // flushing, draining: no later than that, however the client comes on

  std::string input;  // bytes not yet used
  HeadScanner scanner;
  std::size_t head_bytes = 0;  // 0: head unfinished
  RequestHead head;
  bool continue_sent = false;
  std::size_t charged_bytes = 0;  // of a large body, against the common budget

  std::string body;  // of the request that is with the worker
  std::string output;
  std::size_t sent_bytes = 0;
  std::size_t unsent_bytes = 0;  // of an answer left to the loop, against the common budget
  bool close_after = false;
  bool counted = true;  // false: over a limit, only here to be told so
  std::size_t drained_bytes = 0;
};

class ConnectionLoop {
 public:
  struct Hooks {
    std::function<void(const Connection&)> admit;  // may throw Problem, before the body is read
    std::function<void(Connection&)> work;  // takes a whole request to a worker; finish() or detach() follows
    std::function<std::string(const Response&)> last_answer;  // bytes of an answer that ends the connection
    std::function<void(std::string_view)> report;             // a line for the log, once a minute at most
  };

  ConnectionLoop(const HttpLimits& limits, Hooks hooks);
  ~ConnectionLoop();
  ConnectionLoop(const ConnectionLoop&) = delete;
  ConnectionLoop& operator=(const ConnectionLoop&) = delete;

  void start(Descriptor listener);
  void refuse_new();  // closes the listener and all connections that are not being answered
  void stop();        // flushes what is left for a second at most, joins. Workers must have ended.

  // From the worker that holds the connection; it must not touch it afterwards.
  void finish(Connection& connection, std::string bytes, bool close_after);
  Descriptor detach(Connection& connection);

  int open_connections() const { return open_connections_; }
  std::uint64_t refused_connections() const { return refused_connections_; }
  std::uint64_t refused_requests() const { return refused_requests_; }

 private:
  enum class Phase { serving, refusing, ending };

  void run();
  void serve(std::uint64_t key, std::uint32_t events, Moment now);
  void accept_waiting(Moment now);
  void admit_socket(Descriptor socket, Moment now);
  void collect(Connection& connection, Moment now);
  bool advance(Connection& connection, Moment now);  // true: the request is still unfinished
  bool take_head(Connection& connection);
  void charge_body(Connection& connection);
  void refuse(Connection& connection, const Problem& problem, Moment now);
  void flush(Connection& connection, Moment now);
  void drain(Connection& connection, Moment now);
  void leave(Connection& connection, Moment now);  // closes once the client has taken its answer
  void cut(Connection& connection);                // closes now; what the client has not taken is lost
  void start_draining(Connection& connection, Moment now);
  void wait_for_request(Connection& connection, Moment now);
  void close(Connection& connection);
  void forget(Connection& connection);  // the same with the mutex held
  void tell_busy(Connection& connection, bool full);
  void set_flush_deadline(Connection& connection, Moment now) const;
  void release_charge(Connection& connection);
  void sweep(Moment now);
  void pause_accepting(int error, Moment now);
  void give_up_unsent();
  void leave_idle_connections();
  bool answers_pending(bool unread_too);

  const HttpLimits limits_;
  const Hooks hooks_;
  Poller poller_;
  Descriptor listener_;
  Moment accept_again_{};
  Moment report_again_{};
  std::thread thread_;
  std::atomic<Phase> phase_ = Phase::serving;
  std::vector<char> scratch_;

  // Guards the map and the hand-over of a connection between this thread and a worker, so that a
  // connection is never swept while its worker returns it.
  std::mutex mutex_;
  std::unordered_map<std::uint64_t, std::unique_ptr<Connection>> connections_;
  std::unordered_map<std::string, int> per_address_;
  std::uint64_t next_key_ = 2;  // 0 is the wake-up, 1 the listener
  int uncounted_ = 0;

  std::atomic<std::size_t> charged_bytes_ = 0;
  std::atomic<std::size_t> unsent_bytes_ = 0;
  std::atomic<int> open_connections_ = 0;
  std::atomic<std::uint64_t> refused_connections_ = 0;
  std::atomic<std::uint64_t> refused_requests_ = 0;
};

}  // namespace hearthfront::server
