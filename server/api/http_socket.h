// The few socket and epoll calls of the front, with errors turned into advice. Each owner is used by one
// thread unless said otherwise. Failure to listen is std::runtime_error with what to do about it.
#pragma once

#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>
#include <utility>

namespace hearthfront::server {

// A file descriptor that closes itself.
class Descriptor {
 public:
  Descriptor() = default;
  explicit Descriptor(int number) : number_(number) {}
  Descriptor(Descriptor&& other) noexcept : number_(std::exchange(other.number_, -1)) {}
  Descriptor& operator=(Descriptor&& other) noexcept;
  ~Descriptor() { reset(); }

  int get() const { return number_; }
  explicit operator bool() const { return number_ >= 0; }
  void reset();

 private:
  int number_ = -1;
};

struct Listener {
  Descriptor socket;
  int port = 0;
};
// Non-blocking, backlog 1024, the port not shared with another process. Port 0 takes a free one.
Listener open_listener(const std::string& address, int port);

// TCP_NODELAY, an end for peers that vanished without a word, and a bound on what the kernel holds for those
// that do not read.
void tune_connection(int socket);
// Whether the kernel holds bytes for a peer that is still there and has not taken them.
bool has_untaken(int socket);
// A close after this frees what the peer has not taken, and resets the connection; else the kernel would keep
// both, counted by nobody.
void discard_untaken(int socket);
std::string remote_address_of(int socket);  // literal; IPv4 also where it came in over IPv6
std::string local_address_of(int socket);

// Sends what the socket takes now. False where the connection is broken.
bool send_some(int socket, std::string_view bytes, std::size_t& sent);

// An epoll set with a wake-up call that any thread may use.
class Poller {
 public:
  static constexpr std::uint64_t wake_key = 0;

  Poller();  // throws std::runtime_error where the system has no descriptors left
  void add(int socket, std::uint32_t events, std::uint64_t key);
  void change(int socket, std::uint32_t events, std::uint64_t key);
  void remove(int socket);
  void wake();
  void clear_wake();
  int get() const { return epoll_.get(); }

 private:
  Descriptor epoll_;
  Descriptor wake_;
};

}  // namespace hearthfront::server
