#include "server/command/signals.h"

#include <poll.h>
#include <pthread.h>
#include <sys/signalfd.h>
#include <unistd.h>

#include <csignal>
#include <system_error>

namespace hearthfront::server {
namespace {

sigset_t stop_set() {
  sigset_t set;
  sigemptyset(&set);
  sigaddset(&set, SIGINT);
  sigaddset(&set, SIGTERM);
  return set;
}

}  // namespace

StopSignals::StopSignals() {
  const sigset_t set = stop_set();
  pthread_sigmask(SIG_BLOCK, &set, nullptr);
  std::signal(SIGPIPE, SIG_IGN);
  descriptor_ = signalfd(-1, &set, SFD_CLOEXEC);
  if (descriptor_ < 0) throw std::system_error(errno, std::generic_category(), "signalfd");
}

StopSignals::~StopSignals() {
  if (descriptor_ >= 0) close(descriptor_);
}

bool StopSignals::wait_for(std::chrono::milliseconds time) const {
  pollfd waiting{descriptor_, POLLIN, 0};
  if (poll(&waiting, 1, static_cast<int>(time.count())) <= 0) return false;
  signalfd_siginfo info;
  return read(descriptor_, &info, sizeof info) == sizeof info;
}

void StopSignals::let_go() {
  const sigset_t set = stop_set();
  pthread_sigmask(SIG_UNBLOCK, &set, nullptr);
}

}  // namespace hearthfront::server
