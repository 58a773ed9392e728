// The daemon's only source of "now". Everything that asks for the time takes a Clock, so that tests and
// the demo can run on another one. Thread-safe: the clocks hold no mutable state. They do not fail.
#pragma once

#include <cstdint>
#include <memory>

#include "server/base/settings.h"

namespace hearthfront::server {

class Clock {
 public:
  Clock() = default;
  virtual ~Clock() = default;
  Clock(const Clock&) = delete;
  Clock& operator=(const Clock&) = delete;

  virtual std::int64_t now_us()
      const = 0;                     // microseconds since 1970-01-01 UTC; may step when the host's clock does
  virtual double speed() const = 0;  // seconds of this clock in one real second; 1 in real use
};

class SystemClock final : public Clock {
 public:
  std::int64_t now_us() const override;
  double speed() const override { return 1.0; }
};

// Runs `speed` times as fast as `real` and shows anchor_data when `real` shows anchor_real. For the demo
// only (check_clock_is_allowed in settings.h). Ends stay within the years 0000 to 9999.
class ScaledClock final : public Clock {
 public:
  ScaledClock(std::int64_t anchor_real_us, std::int64_t anchor_data_us, double speed,
              std::unique_ptr<Clock> real = std::make_unique<SystemClock>());
  std::int64_t now_us() const override;
  double speed() const override { return speed_; }

 private:
  const std::int64_t anchor_real_us_, anchor_data_us_;
  const double speed_;
  const std::unique_ptr<Clock> real_;
};

// The clock that the settings ask for.
std::unique_ptr<Clock> make_clock(const Settings& settings);

}  // namespace hearthfront::server
