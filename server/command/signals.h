// SIGINT and SIGTERM as something a thread can wait for. Construct in main before other threads start.
#pragma once

#include <chrono>

namespace hearthfront::server {

class StopSignals {
 public:
  StopSignals();  // blocks both signals in this thread and those it starts; ignores SIGPIPE
  ~StopSignals();
  StopSignals(const StopSignals&) = delete;
  StopSignals& operator=(const StopSignals&) = delete;

  // True when a signal came within the time.
  bool wait_for(std::chrono::milliseconds time) const;
  // From now on a further signal ends the process at once.
  void let_go();

 private:
  int descriptor_ = -1;
};

}  // namespace hearthfront::server
