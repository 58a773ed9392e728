#include "server/base/clock.h"

#include <algorithm>
#include <chrono>

#include "server/base/time_text.h"

namespace hearthfront::server {

std::int64_t SystemClock::now_us() const {
  using namespace std::chrono;
  return duration_cast<microseconds>(system_clock::now().time_since_epoch()).count();
}

ScaledClock::ScaledClock(std::int64_t anchor_real_us, std::int64_t anchor_data_us, double speed,
                         std::unique_ptr<Clock> real)
    : anchor_real_us_(anchor_real_us),
      anchor_data_us_(anchor_data_us),
      speed_(speed),
      real_(std::move(real)) {}

std::int64_t ScaledClock::now_us() const {
  // long double: years of microseconds times the speed need more than the 53 bits of a double.
  const auto real_elapsed = static_cast<long double>(real_->now_us() - anchor_real_us_);
  const long double data =
      static_cast<long double>(anchor_data_us_) + real_elapsed * static_cast<long double>(speed_);
  const auto low = static_cast<long double>(earliest_time_us),
             high = static_cast<long double>(latest_time_us);
  return static_cast<std::int64_t>(std::clamp(data, low, high));
}

std::unique_ptr<Clock> make_clock(const Settings& settings) {
  const Settings::ClockOptions& clock = settings.clock;
  if (!clock.is_scaled() || !clock.anchor_real_us || !clock.anchor_data_us)
    return std::make_unique<SystemClock>();
  return std::make_unique<ScaledClock>(*clock.anchor_real_us, *clock.anchor_data_us, clock.speed);
}

}  // namespace hearthfront::server
