// Runs a load from its start on all its readings: restart, replay, final results and the history of past
// loads. The live engine gets the same bits by adding readings as they come.
#pragma once

#include <cstdint>
#include <functional>
#include <limits>
#include <memory>
#include <string>
#include <vector>

#include "server/live/live_load.h"

namespace hearthfront::server {

// Accepted readings of one channel of the load's furnace in [from, to], ascending, in the channel's unit.
using ReadingSource =
    std::function<std::vector<Sample>(const std::string& channel, std::int64_t from_us, std::int64_t to_us)>;

// A load's readings end with it: what was logged after the end belongs to the next load.
inline std::int64_t readings_until_us(const LoadDefinition& load) {
  return load.ended_us.value_or(std::numeric_limits<std::int64_t>::max());
}

void read_all(LiveLoad& load, const ReadingSource& source);
std::unique_ptr<LiveLoad> derive(std::shared_ptr<const LoadDefinition> definition,
                                 const ReadingSource& source, std::int64_t now_us);

}  // namespace hearthfront::server
