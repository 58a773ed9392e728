// Tells the service manager how the daemon is doing: datagrams to the socket named in NOTIFY_SOCKET
// (sd_notify protocol, systemd sd_notify(3)). Does nothing where the variable is absent. A failing send
// is not an error of ours and is ignored. Construct before threads start; then usable from any thread.
#pragma once

#include <chrono>
#include <optional>
#include <string>
#include <string_view>

namespace hearthfront::server {

class ServiceNotifier {
 public:
  // Takes NOTIFY_SOCKET, WATCHDOG_USEC and WATCHDOG_PID from the environment and removes them, so that
  // child processes do not speak in our name.
  ServiceNotifier();
  ~ServiceNotifier();
  ServiceNotifier(const ServiceNotifier&) = delete;
  ServiceNotifier& operator=(const ServiceNotifier&) = delete;

  bool active() const { return socket_ >= 0; }
  void ready(std::string_view status) const;     // READY=1
  void stopping(std::string_view status) const;  // STOPPING=1
  void status(std::string_view status) const;    // STATUS=, one line
  void watchdog() const;                         // WATCHDOG=1: call only after real progress
  // How often to call watchdog(): half of what the manager allows. Empty: not watched.
  std::optional<std::chrono::microseconds> watchdog_interval() const { return watchdog_interval_; }

 private:
  void send(const std::string& message) const;
  int socket_ = -1;
  std::string address_;  // first byte NUL for an abstract socket
  std::optional<std::chrono::microseconds> watchdog_interval_;
};

}  // namespace hearthfront::server
