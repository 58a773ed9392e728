// The clocks: real time, and the demo's scaled time. Source of the relation: the settings file,
// data time = anchor_data + speed x (real time - anchor_real).
#include "server/base/clock.h"

#include <doctest/doctest.h>

#include <chrono>

#include "server/base/time_text.h"

using namespace hearthfront::server;

namespace {

class HandClock final : public Clock {
 public:
  explicit HandClock(const std::int64_t& hand) : hand_(hand) {}
  std::int64_t now_us() const override { return hand_; }
  double speed() const override { return 1; }

 private:
  const std::int64_t& hand_;
};

constexpr std::int64_t second = 1'000'000;

}  // namespace

TEST_CASE("the scaled clock passes through its anchor and runs at its speed") {
  std::int64_t real_us = 1'772'431'500 * second;
  const std::int64_t data_us = 1'767'225'600 * second;
  const ScaledClock clock(real_us, data_us, 120, std::make_unique<HandClock>(real_us));
  CHECK(clock.speed() == 120.0);
  CHECK(clock.now_us() == data_us);
  real_us += second;
  CHECK(clock.now_us() == data_us + 120 * second);
  real_us += 3599 * second;
  CHECK(clock.now_us() == data_us + 120 * 3600 * second);
  real_us -= 7200 * second;  // before the anchor it runs as well
  CHECK(clock.now_us() == data_us - 120 * 3600 * second);
}

TEST_CASE("the scaled clock stays within the years that times can be written in") {
  std::int64_t real_us = latest_time_us;
  const ScaledClock clock(0, 0, 3600, std::make_unique<HandClock>(real_us));
  CHECK(clock.now_us() == latest_time_us);
  real_us = earliest_time_us;
  CHECK(clock.now_us() == earliest_time_us);
}

TEST_CASE("the scaled clock keeps microseconds after years at high speed") {
  std::int64_t real_us = 0;
  const ScaledClock clock(0, 1, 3600, std::make_unique<HandClock>(real_us));
  real_us = 365ll * 86'400 * second * 2 + 1;  // two years: beyond the 53 bits of a double once scaled
  CHECK(clock.now_us() == real_us * 3600 + 1);
}

TEST_CASE("the system clock shows the host's time at speed 1") {
  using namespace std::chrono;
  const auto read_us = [] {
    return duration_cast<microseconds>(system_clock::now().time_since_epoch()).count();
  };
  const std::int64_t before = read_us();
  const SystemClock clock;
  const std::int64_t now = clock.now_us();
  CHECK(now >= before);
  CHECK(now <= read_us());
  CHECK(clock.speed() == 1.0);
}

TEST_CASE("the settings choose the clock") {
  Settings settings;
  CHECK(dynamic_cast<const SystemClock*>(make_clock(settings).get()) != nullptr);
  settings.clock.speed = 60;
  settings.clock.anchor_real_us = 0;
  settings.clock.anchor_data_us = 0;
  CHECK(make_clock(settings)->speed() == 60.0);
}
