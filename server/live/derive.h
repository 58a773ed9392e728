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

// Accepted readings of one channel in [from, to], ascending, in the channel's unit; and the stretches that
// people marked on it.
struct ReadingSource {
  std::function<std::vector<Sample>(const LoadChannels::Used& channel, std::int64_t from_us,
                                    std::int64_t to_us)>
      readings;
  std::function<std::vector<TimeSpan>(const LoadChannels::Used& channel, std::int64_t from_us,
                                      std::int64_t to_us)>
      marks;
};

// A load's readings end with it: what was logged after the end belongs to the next load.
inline std::int64_t readings_until_us(const LoadDefinition& load) {
  return load.ended_us.value_or(std::numeric_limits<std::int64_t>::max());
}

// The stretch in which readings of a load's channels can matter to it.
TimeSpan reading_span(const LiveLoad& load);

void read_all(LiveLoad& load, const ReadingSource& source);
// What is known now of one channel in [from, to], marks in the whole of reading_span.
void read_again(LiveLoad& load, const ReadingSource& source, std::size_t used, std::int64_t from_us,
                std::int64_t to_us);
// Without members there are no bands: for a look that may not take long.
enum class Members { with, without };
std::unique_ptr<LiveLoad> derive(std::shared_ptr<const LoadDefinition> definition,
                                 const ReadingSource& source, std::int64_t now_us,
                                 Members members = Members::with);

}  // namespace hearthfront::server
