#include "server/api/http_events.h"

#include <sys/epoll.h>
#include <sys/socket.h>

#include <algorithm>
#include <array>
#include <stdexcept>
#include <utility>

namespace hearthfront::server {
namespace {

constexpr std::size_t max_queued_bytes = 256u << 10;  // per client
constexpr std::size_t max_ordered_bytes = 16u << 20;  // published and not yet handed out
// Without a bound the kernel would buffer megabytes for each client that does not read.
constexpr int send_buffer_bytes = 256 << 10;

}  // namespace

std::string event_text(std::string_view event, std::string_view data, std::uint64_t id) {
  std::string text = "id: " + std::to_string(id) + "\nevent: ";
  for (const char c : event) {
    if (c != '\r' && c != '\n') text += c;
  }
  text.reserve(text.size() + data.size() + 16);
  while (true) {
    const auto end = data.find_first_of("\r\n");
    text.append("\ndata: ").append(data.substr(0, end));
    if (end == std::string_view::npos) break;
    data.remove_prefix(end + (data.substr(end, 2) == "\r\n" ? 2 : 1));
  }
  return text += "\n\n";
}

EventHub::EventHub(int max_streams, int heartbeat_s) : max_streams_(max_streams), heartbeat_(heartbeat_s) {}

EventHub::~EventHub() {
  stop();
}

void EventHub::start() {
  thread_ = std::thread([this] { run(); });
}

void EventHub::stop() {
  {
    const std::lock_guard lock(mutex_);
    stopping_ = true;
  }
  poller_.wake();
  if (thread_.joinable()) thread_.join();
}

std::optional<std::uint64_t> EventHub::reserve() {
  if (open_streams_.fetch_add(1) >= max_streams_) {
    --open_streams_;
    return std::nullopt;
  }
  const auto place = next_place_++;
  order({Order::Kind::reserve, place, {}, {}});
  return place;
}

void EventHub::cancel(std::uint64_t place) {
  order({Order::Kind::cancel, place, {}, {}});
}

void EventHub::adopt(std::uint64_t place, Descriptor socket, std::string first_bytes) {
  order({Order::Kind::adopt, place, std::move(socket),
         std::make_shared<const std::string>(std::move(first_bytes))});
}

void EventHub::publish(std::string_view event, std::string_view data, std::uint64_t id) {
  if (open_streams_ == 0) return;
  order({Order::Kind::event, 0, {}, std::make_shared<const std::string>(event_text(event, data, id))});
}

void EventHub::order(Order order) {
  {
    const std::lock_guard lock(mutex_);
    if (stopping_) return;
    if (order.kind == Order::Kind::event) {
      // The hub never waits for a client, so this takes a publisher far beyond any sensible rate. Then all
      // clients start anew rather than miss an event unawares.
      if (ordered_bytes_ + order.text->size() > max_ordered_bytes) {
        overrun_ = true;
        return;
      }
      ordered_bytes_ += order.text->size();
    }
    orders_.push_back(std::move(order));
  }
  poller_.wake();
}

void EventHub::run() {
  std::array<epoll_event, 128> events{};
  auto next_beat = std::chrono::steady_clock::now() + heartbeat_;
  while (true) {
    const auto before = std::chrono::steady_clock::now();
    const auto wait = std::chrono::duration_cast<std::chrono::milliseconds>(next_beat - before).count() + 1;
    const int timeout_ms = clients_.empty() ? -1 : static_cast<int>(std::max<long>(wait, 0));
    const int count = epoll_wait(poller_.get(), events.data(), static_cast<int>(events.size()), timeout_ms);
    const auto now = std::chrono::steady_clock::now();
    for (int i = 0; i < count; ++i) {
      const auto& event = events.at(static_cast<std::size_t>(i));
      if (event.data.u64 == Poller::wake_key) {
        poller_.clear_wake();
        continue;
      }
      const auto found = clients_.find(event.data.u64);
      if (found == clients_.end()) continue;
      if ((event.events & (EPOLLRDHUP | EPOLLHUP | EPOLLERR)) != 0) {
        leave(found->first, false);
      } else {
        write(found->first, found->second, now);
      }
    }
    std::vector<Order> orders;
    bool overrun = false;
    {
      const std::lock_guard lock(mutex_);
      if (stopping_) break;
      orders.swap(orders_);
      ordered_bytes_ = 0;
      overrun = std::exchange(overrun_, false);
    }
    for (auto& one : orders) carry_out(one, now);
    if (overrun) {
      for (auto& [place, client] : clients_) leave(place, true);
    }
    if (now >= next_beat) {
      beat(now);
      next_beat = now + heartbeat_;
    }
    remove_left();
  }
  clients_.clear();
  open_streams_ = 0;
  const std::lock_guard lock(mutex_);
  orders_.clear();
}

void EventHub::carry_out(Order& order, Moment now) {
  switch (order.kind) {
    case Order::Kind::reserve:
      clients_[order.place].progress = now;
      return;
    case Order::Kind::cancel:
      return leave(order.place, false);
    case Order::Kind::adopt:
      return adopt_now(order, now);
    case Order::Kind::event:
      for (auto& [place, client] : clients_) queue_event(place, client, order.text, now);
      return;
  }
}

void EventHub::adopt_now(Order& order, Moment now) {
  const auto found = clients_.find(order.place);
  if (found == clients_.end()) return;
  Client& client = found->second;
  client.socket = std::move(order.socket);
  ::setsockopt(client.socket.get(), SOL_SOCKET, SO_SNDBUF, &send_buffer_bytes, sizeof send_buffer_bytes);
  try {
    poller_.add(client.socket.get(), EPOLLRDHUP, order.place);
  } catch (const std::runtime_error&) {
    return leave(order.place, true);
  }
  client.queue.push_front(order.text);
  client.progress = now;
  write(order.place, client, now);
}

void EventHub::queue_event(std::uint64_t place, Client& client, const Text& text, Moment now) {
  // One event alone may be larger than that: a client that is up to date takes it.
  if (client.queued_bytes > 0 && client.queued_bytes + text->size() > max_queued_bytes)
    return leave(place, true);
  if (client.queue.empty()) client.progress = now;
  client.queue.push_back(text);
  client.queued_bytes += text->size();
  if (client.socket && !client.waits_for_room) write(place, client, now);
}

void EventHub::write(std::uint64_t place, Client& client, Moment now) {
  while (!client.queue.empty()) {
    const Text& text = client.queue.front();
    const auto before = client.sent_bytes;
    if (!send_some(client.socket.get(), *text, client.sent_bytes)) return leave(place, false);
    if (client.sent_bytes > before) client.progress = now;
    if (client.sent_bytes < text->size()) break;
    if (client.greeted) client.queued_bytes -= text->size();
    client.greeted = true;
    client.sent_bytes = 0;
    client.queue.pop_front();
  }
  const bool waits = !client.queue.empty();
  if (waits == client.waits_for_room) return;
  client.waits_for_room = waits;
  poller_.change(client.socket.get(), waits ? EPOLLRDHUP | EPOLLOUT : EPOLLRDHUP, place);
}

void EventHub::beat(Moment now) {
  const auto comment = std::make_shared<const std::string>(": still here\n\n");
  const auto patience = std::max(2 * heartbeat_, std::chrono::seconds(30));
  for (auto& [place, client] : clients_) {
    if (client.queue.empty()) {
      queue_event(place, client, comment, now);
    } else if (client.socket && now - client.progress > patience) {
      leave(place, true);
    }
  }
}

// Clients are taken out at the end of a turn, so that loops over all of them may call this.
void EventHub::leave(std::uint64_t place, bool dropped) {
  const auto found = clients_.find(place);
  if (found == clients_.end() || std::find(left_.begin(), left_.end(), place) != left_.end()) return;
  left_.push_back(place);
  if (dropped) ++dropped_streams_;
}

void EventHub::remove_left() {
  for (const auto place : left_) {
    const auto found = clients_.find(place);
    // It wants no more, or does not read: nothing may stay in the kernel for it.
    if (found->second.socket) discard_untaken(found->second.socket.get());
    clients_.erase(found);
    --open_streams_;
  }
  left_.clear();
}

}  // namespace hearthfront::server
