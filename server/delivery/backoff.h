// How long to wait after a failed try. Pure.
#pragma once

#include <algorithm>
#include <cstdint>

namespace hearthfront::server {

inline constexpr double first_wait_s = 10, longest_wait_s = 900;

// Seconds after `attempts` failed tries (1 or more): 10, 20, 40 ... 900, and up to a quarter more by `jitter`
// in [0, 1), so that many messages to one receiver do not come back at one moment. Doubling with a ceiling
// and jitter: common practice, no source.
inline double wait_after_s(std::int64_t attempts, double jitter) {
  double wait = first_wait_s;
  for (std::int64_t i = 1; i < attempts && wait < longest_wait_s; ++i) wait *= 2;
  return std::min(wait, longest_wait_s) * (1 + 0.25 * jitter);
}

}  // namespace hearthfront::server
