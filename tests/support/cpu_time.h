// Processor time of this thread, in seconds: on a shared machine the clock on the wall says more about the
// neighbours than about the program.
#pragma once

#include <ctime>

namespace hearthfront::testing {

inline double thread_seconds() {
  timespec now{};
  clock_gettime(CLOCK_THREAD_CPUTIME_ID, &now);
  return static_cast<double>(now.tv_sec) + 1e-9 * static_cast<double>(now.tv_nsec);
}

}  // namespace hearthfront::testing
