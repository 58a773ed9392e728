#include "server/api/http_socket.h"

#include <arpa/inet.h>
#include <linux/sockios.h>
#include <netdb.h>
#include <netinet/in.h>
#include <netinet/tcp.h>
#include <sys/epoll.h>
#include <sys/eventfd.h>
#include <sys/ioctl.h>
#include <sys/socket.h>
#include <unistd.h>

#include <array>
#include <cerrno>
#include <memory>
#include <stdexcept>
#include <system_error>

namespace hearthfront::server {
namespace {

constexpr int backlog = 1024;
constexpr unsigned vanished_after_ms = 30000;
// Beside what the peer's window admits. Without it the kernel takes some megabytes for each peer that does
// not read, which no limit of ours would see.
constexpr int max_unsent_in_kernel_bytes = 128 << 10;
// The kernel doubles it. Else a buffer grows to what the system allows each, often 6 MB or more, and a peer
// whose requests wait can fill it.
constexpr int receive_buffer_bytes = 256 << 10;

// bind, getsockname and the like take the general address type of C.
sockaddr* general(sockaddr_storage& storage) {
  return reinterpret_cast<sockaddr*>(&storage);
}

std::string literal(const sockaddr_storage& storage) {
  std::array<char, INET6_ADDRSTRLEN> text{};
  if (storage.ss_family == AF_INET) {
    const auto& v4 = reinterpret_cast<const sockaddr_in&>(storage);
    inet_ntop(AF_INET, &v4.sin_addr, text.data(), text.size());
  } else if (storage.ss_family == AF_INET6) {
    const auto& v6 = reinterpret_cast<const sockaddr_in6&>(storage);
    const bool mapped = IN6_IS_ADDR_V4MAPPED(&v6.sin6_addr);
    inet_ntop(mapped ? AF_INET : AF_INET6, &v6.sin6_addr.s6_addr[mapped ? 12 : 0], text.data(), text.size());
  }
  return text.data();
}

int port_of(int socket) {
  sockaddr_storage storage{};
  socklen_t size = sizeof storage;
  if (getsockname(socket, general(storage), &size) != 0) return 0;
  if (storage.ss_family == AF_INET) return ntohs(reinterpret_cast<const sockaddr_in&>(storage).sin_port);
  return ntohs(reinterpret_cast<const sockaddr_in6&>(storage).sin6_port);
}

void switch_on(int socket, int level, int option) {
  const int on = 1;
  setsockopt(socket, level, option, &on, sizeof on);
}

std::string advice(int error, int port) {
  switch (error) {
    case EADDRINUSE:
      return "Another program uses this port. Stop it or choose another port.";
    case EACCES:
      return port < 1024 ? "Ports below 1024 need a privilege. Choose a port above."
                         : "The system forbids it.";
    case EADDRNOTAVAIL:
      return "This machine has no such address. Use one of its own, or 127.0.0.1.";
    default:
      return std::generic_category().message(error) + ".";
  }
}

}  // namespace

Descriptor& Descriptor::operator=(Descriptor&& other) noexcept {
  if (this != &other) {
    reset();
    number_ = std::exchange(other.number_, -1);
  }
  return *this;
}

void Descriptor::reset() {
  if (number_ >= 0) ::close(number_);
  number_ = -1;
}

Listener open_listener(const std::string& address, int port) {
  const auto fail = [&](const std::string& why) {
    return std::runtime_error("cannot listen on " + address + " port " + std::to_string(port) + ": " + why);
  };
  if (port < 0 || port > 65535) throw fail("A port is a number from 0 to 65535.");
  addrinfo hints{};
  hints.ai_socktype = SOCK_STREAM;
  hints.ai_flags = AI_PASSIVE | AI_NUMERICSERV;
  addrinfo* found = nullptr;
  if (getaddrinfo(address.c_str(), std::to_string(port).c_str(), &hints, &found) != 0 || found == nullptr) {
    throw fail("The address is not known. Use an address of this machine, such as 127.0.0.1.");
  }
  const std::unique_ptr<addrinfo, void (*)(addrinfo*)> owner(found, freeaddrinfo);

  int error = 0;
  for (const addrinfo* one = found; one != nullptr; one = one->ai_next) {
    Descriptor socket(::socket(one->ai_family, SOCK_STREAM | SOCK_NONBLOCK | SOCK_CLOEXEC, 0));
    // Not SO_REUSEPORT: with it a second daemon would take half of the connections without a word.
    if (socket) {
      switch_on(socket.get(), SOL_SOCKET, SO_REUSEADDR);
      // Connections inherit it.
      setsockopt(socket.get(), SOL_SOCKET, SO_RCVBUF, &receive_buffer_bytes, sizeof receive_buffer_bytes);
    }
    if (socket && ::bind(socket.get(), one->ai_addr, one->ai_addrlen) == 0 &&
        ::listen(socket.get(), backlog) == 0) {
      const int bound_port = port_of(socket.get());
      return {std::move(socket), bound_port};
    }
    error = errno;
    // A name may stand for an address family that this machine has switched off; a taken port may not be
    // passed over in silence.
    if (error != EADDRNOTAVAIL && error != EAFNOSUPPORT) break;
  }
  throw fail(advice(error, port));
}

void tune_connection(int socket) {
  switch_on(socket, IPPROTO_TCP, TCP_NODELAY);
  setsockopt(socket, IPPROTO_TCP, TCP_USER_TIMEOUT, &vanished_after_ms, sizeof vanished_after_ms);
  setsockopt(socket, IPPROTO_TCP, TCP_NOTSENT_LOWAT, &max_unsent_in_kernel_bytes,
             sizeof max_unsent_in_kernel_bytes);
}

bool has_untaken(int socket) {
  tcp_info info{};
  socklen_t size = sizeof info;
  if (getsockopt(socket, IPPROTO_TCP, TCP_INFO, &info, &size) != 0 || info.tcpi_state == TCP_CLOSE)
    return false;
  int bytes = 0;
  return ioctl(socket, SIOCOUTQ, &bytes) == 0 && bytes > 0;
}

void discard_untaken(int socket) {
  const linger at_once{1, 0};
  setsockopt(socket, SOL_SOCKET, SO_LINGER, &at_once, sizeof at_once);
}

std::string remote_address_of(int socket) {
  sockaddr_storage storage{};
  socklen_t size = sizeof storage;
  return getpeername(socket, general(storage), &size) == 0 ? literal(storage) : std::string{};
}

std::string local_address_of(int socket) {
  sockaddr_storage storage{};
  socklen_t size = sizeof storage;
  return getsockname(socket, general(storage), &size) == 0 ? literal(storage) : std::string{};
}

bool send_some(int socket, std::string_view bytes, std::size_t& sent) {
  while (sent < bytes.size()) {
    const auto count = ::send(socket, bytes.data() + sent, bytes.size() - sent, MSG_NOSIGNAL | MSG_DONTWAIT);
    if (count > 0) {
      sent += static_cast<std::size_t>(count);
    } else if (count < 0 && errno != EINTR) {
      return errno == EAGAIN || errno == EWOULDBLOCK;
    }
  }
  return true;
}

Poller::Poller() : epoll_(epoll_create1(EPOLL_CLOEXEC)), wake_(eventfd(0, EFD_NONBLOCK | EFD_CLOEXEC)) {
  if (!epoll_ || !wake_) {
    throw std::runtime_error("no file descriptors left: raise the limit of open files of this service");
  }
  add(wake_.get(), EPOLLIN, wake_key);
}

void Poller::add(int socket, std::uint32_t events, std::uint64_t key) {
  epoll_event event{};
  event.events = events;
  event.data.u64 = key;
  if (epoll_ctl(epoll_.get(), EPOLL_CTL_ADD, socket, &event) != 0) {
    throw std::runtime_error("the system watches no further socket: " +
                             std::generic_category().message(errno));
  }
}

void Poller::change(int socket, std::uint32_t events, std::uint64_t key) {
  epoll_event event{};
  event.events = events;
  event.data.u64 = key;
  // Cannot fail for a member of the set, and every caller holds one.
  epoll_ctl(epoll_.get(), EPOLL_CTL_MOD, socket, &event);
}

void Poller::remove(int socket) {
  epoll_ctl(epoll_.get(), EPOLL_CTL_DEL, socket, nullptr);
}

void Poller::wake() {
  const std::uint64_t one = 1;
  // A full counter means that the wake-up is pending already.
  [[maybe_unused]] const auto written = ::write(wake_.get(), &one, sizeof one);
}

void Poller::clear_wake() {
  std::uint64_t count = 0;
  [[maybe_unused]] const auto got = ::read(wake_.get(), &count, sizeof count);
}

}  // namespace hearthfront::server
