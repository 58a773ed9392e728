#include "server/base/notify.h"

#include <sys/socket.h>
#include <sys/un.h>
#include <unistd.h>

#include <charconv>
#include <cstdint>
#include <cstdlib>
#include <cstring>

namespace hearthfront::server {
namespace {

std::string take_variable(const char* name) {
  const char* value = std::getenv(name);
  std::string copy = value != nullptr ? value : "";
  unsetenv(name);
  return copy;
}

template <typename Integer>
std::optional<Integer> integer_from(const std::string& text) {
  Integer value = 0;
  const auto [end, fault] = std::from_chars(text.data(), text.data() + text.size(), value);
  if (fault != std::errc{} || end != text.data() + text.size()) return {};
  return value;
}

// A line break would start another assignment.
std::string one_line(std::string_view status) {
  std::string line(status.substr(0, 500));
  for (char& c : line) {
    if (c == '\n' || c == '\0') c = ' ';
  }
  return line;
}

}  // namespace

ServiceNotifier::ServiceNotifier() : address_(take_variable("NOTIFY_SOCKET")) {
  const std::string interval = take_variable("WATCHDOG_USEC"), pid = take_variable("WATCHDOG_PID");
  if (address_.empty() || address_.size() >= sizeof(sockaddr_un{}.sun_path)) return;
  if (address_.front() != '/' && address_.front() != '@') return;
  if (address_.front() == '@') address_.front() = '\0';
  socket_ = socket(AF_UNIX, SOCK_DGRAM | SOCK_CLOEXEC, 0);
  const std::optional<std::int64_t> allowed_us = integer_from<std::int64_t>(interval);
  const bool for_us = pid.empty() || integer_from<pid_t>(pid) == getpid();
  if (active() && for_us && allowed_us && *allowed_us > 1) {
    watchdog_interval_ = std::chrono::microseconds(*allowed_us / 2);
  }
}

ServiceNotifier::~ServiceNotifier() {
  if (socket_ >= 0) close(socket_);
}

void ServiceNotifier::ready(std::string_view status) const {
  send("READY=1\nSTATUS=" + one_line(status));
}
void ServiceNotifier::stopping(std::string_view status) const {
  send("STOPPING=1\nSTATUS=" + one_line(status));
}
void ServiceNotifier::status(std::string_view status) const {
  send("STATUS=" + one_line(status));
}
void ServiceNotifier::watchdog() const {
  send("WATCHDOG=1");
}

void ServiceNotifier::send(const std::string& message) const {
  if (!active()) return;
  sockaddr_un to{};
  to.sun_family = AF_UNIX;
  std::memcpy(to.sun_path, address_.data(), address_.size());
  const auto length = static_cast<socklen_t>(offsetof(sockaddr_un, sun_path) + address_.size());
  // MSG_DONTWAIT: a manager that does not read must not hold up the daemon.
  sendto(socket_, message.data(), message.size(), MSG_NOSIGNAL | MSG_DONTWAIT,
         reinterpret_cast<const sockaddr*>(&to), length);
}

}  // namespace hearthfront::server
