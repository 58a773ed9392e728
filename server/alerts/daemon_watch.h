// What the daemon sees of itself: free disk, a host clock that jumps, readings from the future, messages that
// got stuck. One thread at a time; throws StorageError from the reader.
#pragma once

#include <chrono>
#include <cstdint>
#include <map>
#include <optional>
#include <string>

#include "server/alerts/rules.h"
#include "server/base/clock.h"
#include "storage/store.h"

namespace hearthfront::server {

class DaemonWatch {
 public:
  using Steady = std::chrono::steady_clock::time_point;

  DaemonWatch(const Clock& clock, std::string database) : clock_(clock), database_(std::move(database)) {}
  // The cheap part, at each look: compares the two clocks. A step of more than 30 s (of real time) is said
  // for ten minutes. True at the look that sees it.
  bool compare_clocks(std::int64_t now_us, Steady steady);
  // The rest, read from disk and database; `store_trouble` as in DaemonState.
  DaemonState look(storage::Reader& reader, std::int64_t now_us, Steady steady, std::string store_trouble);

 private:
  const Clock& clock_;
  const std::string database_;
  std::optional<std::pair<std::int64_t, Steady>> last_;
  std::optional<double> jump_s_;
  Steady jump_at_{};
  std::map<std::string, std::int64_t> future_counts_;  // by furnace
  std::map<std::string, Steady> future_at_;
  bool counted_ = false;
};

}  // namespace hearthfront::server
