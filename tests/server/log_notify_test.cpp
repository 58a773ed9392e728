// Messages to the service manager. Source: sd_notify(3), environment NOTIFY_SOCKET, WATCHDOG_USEC,
// WATCHDOG_PID.
#include "server/base/notify.h"

#include <doctest/doctest.h>
#include <sys/socket.h>
#include <sys/un.h>
#include <unistd.h>

#include <cstddef>
#include <cstdlib>
#include <cstring>
#include <string>

#include "server/settings_support.h"

using namespace hearthfront::server;

namespace {

// The manager's end. A name that begins with NUL is in the abstract name space.
class Manager {
 public:
  explicit Manager(const std::string& name)
      : socket_(socket(AF_UNIX, SOCK_DGRAM | SOCK_CLOEXEC | SOCK_NONBLOCK, 0)) {
    sockaddr_un address{};
    address.sun_family = AF_UNIX;
    std::memcpy(address.sun_path, name.data(), name.size());
    const auto length = static_cast<socklen_t>(offsetof(sockaddr_un, sun_path) + name.size());
    REQUIRE(bind(socket_, reinterpret_cast<const sockaddr*>(&address), length) == 0);
  }
  ~Manager() { close(socket_); }
  Manager(const Manager&) = delete;
  Manager& operator=(const Manager&) = delete;

  std::string take() const {
    char buffer[2000];
    const ssize_t count = recv(socket_, buffer, sizeof buffer, 0);
    return count < 0 ? "nothing" : std::string(buffer, static_cast<std::size_t>(count));
  }

 private:
  int socket_;
};

}  // namespace

TEST_CASE("without a service manager nothing happens") {
  unsetenv("NOTIFY_SOCKET");
  const ServiceNotifier notifier;
  CHECK(!notifier.active());
  CHECK(!notifier.watchdog_interval());
  notifier.ready("serving");
  notifier.watchdog();
}

TEST_CASE("each message is one datagram with one assignment a line") {
  const hearthfront::test::ScratchFolder folder;
  const Manager manager(folder.path("socket"));
  setenv("NOTIFY_SOCKET", folder.path("socket").c_str(), 1);
  setenv("WATCHDOG_USEC", "30000000", 1);
  setenv("WATCHDOG_PID", std::to_string(getpid()).c_str(), 1);
  const ServiceNotifier notifier;
  REQUIRE(notifier.active());
  CHECK(notifier.watchdog_interval() == std::chrono::seconds(15));
  CHECK(std::getenv("NOTIFY_SOCKET") == nullptr);
  CHECK(std::getenv("WATCHDOG_USEC") == nullptr);

  notifier.ready("Serving on 127.0.0.1:8473");
  CHECK(manager.take() == "READY=1\nSTATUS=Serving on 127.0.0.1:8473");
  notifier.status("a\nREADY=1");
  CHECK(manager.take() == "STATUS=a READY=1");
  notifier.watchdog();
  CHECK(manager.take() == "WATCHDOG=1");
  notifier.stopping("bye");
  CHECK(manager.take() == "STOPPING=1\nSTATUS=bye");
  CHECK(manager.take() == "nothing");
}

TEST_CASE("an abstract socket is named with a leading @") {
  const std::string name = "hearthfront-test-" + std::to_string(getpid());
  const Manager manager('\0' + name);
  setenv("NOTIFY_SOCKET", ('@' + name).c_str(), 1);
  const ServiceNotifier notifier;
  notifier.watchdog();
  CHECK(manager.take() == "WATCHDOG=1");
}

TEST_CASE("a watchdog meant for another process, a nameless or endless socket are ignored") {
  setenv("NOTIFY_SOCKET", "/nowhere", 1);
  setenv("WATCHDOG_USEC", "30000000", 1);
  setenv("WATCHDOG_PID", "1", 1);
  const ServiceNotifier other;
  CHECK(!other.watchdog_interval());
  other.ready("nobody listens, and that is no error");

  setenv("NOTIFY_SOCKET", "relative", 1);
  CHECK(!ServiceNotifier().active());
  setenv("NOTIFY_SOCKET", ("/" + std::string(200, 'x')).c_str(), 1);
  CHECK(!ServiceNotifier().active());
}
