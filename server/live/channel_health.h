// What is amiss with one channel, judged by its recent readings alone. Limits by role; all common practice,
// no source. For the eye only: nothing here enters the model.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "server/base/plant.h"
#include "server/live/series.h"

namespace hearthfront::server {

enum class Health : std::uint8_t { good, silent, gap, stuck, noisy, jumping, drifting, masked };
const char* text(Health health);

struct ChannelHealth {
  Health health = Health::good;
  std::string sentence;
  std::optional<std::int64_t> since_us;
  std::optional<double> typical_interval_s;  // median
};

inline constexpr std::int64_t health_window_us = 4LL * 3'600'000'000;

// `samples`: accepted readings of the last `health_window_us`, in the channel's unit. `partner`: another
// channel of the same chamber that should show the same temperature (furnace and load thermocouple).
struct Partner {
  std::string name;
  std::vector<Sample> samples;  // in the unit of the channel judged
};
ChannelHealth judge(const Channel& channel, const std::vector<Sample>& samples,
                    const std::vector<TimeSpan>& marks, const std::optional<Partner>& partner,
                    std::int64_t now_us);

}  // namespace hearthfront::server
