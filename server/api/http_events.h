// Server-sent events (WHATWG HTML, "Server-sent events"): one epoll thread holds all streams and writes to
// each what its socket takes. The text of an event exists once for all. A client that does not read is
// dropped when its queue is full or stands still; it reconnects by itself. Any thread may call any function.
#pragma once

#include <atomic>
#include <chrono>
#include <cstddef>
#include <cstdint>
#include <deque>
#include <memory>
#include <mutex>
#include <optional>
#include <string>
#include <string_view>
#include <thread>
#include <unordered_map>
#include <vector>

#include "server/api/http_socket.h"

namespace hearthfront::server {

// One event in the stream's own format; line ends inside `data` make further data lines.
std::string event_text(std::string_view event, std::string_view data, std::uint64_t id);

class EventHub {
 public:
  EventHub(int max_streams, int heartbeat_s);
  ~EventHub();
  EventHub(const EventHub&) = delete;
  EventHub& operator=(const EventHub&) = delete;

  void start();
  void stop();  // ends all streams, joins

  // A place for a new client, from which on it misses no event; nothing where all are taken. Either
  // adopt() or cancel() must follow.
  std::optional<std::uint64_t> reserve();
  void cancel(std::uint64_t place);
  void adopt(std::uint64_t place, Descriptor socket, std::string first_bytes);

  void publish(std::string_view event, std::string_view data, std::uint64_t id);

  int open_streams() const { return open_streams_; }
  std::uint64_t dropped_streams() const { return dropped_streams_; }

 private:
  using Moment = std::chrono::steady_clock::time_point;
  using Text = std::shared_ptr<const std::string>;

  struct Order {  // from other threads to the hub's
    enum class Kind { reserve, cancel, adopt, event } kind = Kind::event;
    std::uint64_t place = 0;
    Descriptor socket;
    Text text;
  };
  struct Client {
    Descriptor socket;  // none yet: the greeting is being made
    std::deque<Text> queue;
    std::size_t sent_bytes = 0;    // of the first text in the queue
    std::size_t queued_bytes = 0;  // of all texts, greeting excluded
    bool greeted = false;
    bool waits_for_room = false;
    Moment progress;
  };

  void run();
  void order(Order order);
  void carry_out(Order& order, Moment now);
  void adopt_now(Order& order, Moment now);
  void queue_event(std::uint64_t place, Client& client, const Text& text, Moment now);
  void write(std::uint64_t place, Client& client, Moment now);
  void beat(Moment now);
  void leave(std::uint64_t place, bool dropped);
  void remove_left();

  const int max_streams_;
  const std::chrono::seconds heartbeat_;
  Poller poller_;
  std::thread thread_;

  std::mutex mutex_;
  std::vector<Order> orders_;
  std::size_t ordered_bytes_ = 0;
  bool overrun_ = false;
  bool stopping_ = false;

  std::unordered_map<std::uint64_t, Client> clients_;  // the hub thread's alone
  std::vector<std::uint64_t> left_;
  std::atomic<std::uint64_t> next_place_ = 1;
  std::atomic<int> open_streams_ = 0;
  std::atomic<std::uint64_t> dropped_streams_ = 0;
};

}  // namespace hearthfront::server
