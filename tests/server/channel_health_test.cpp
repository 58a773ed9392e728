// What is said of a channel from its readings alone. Limits are common practice, no source; the readings are
// invented.
#include <doctest/doctest.h>

#include <cmath>
#include <random>

#include "server/live/channel_health.h"

using namespace hearthfront::server;

namespace {

constexpr std::int64_t minute_us = 60'000'000;
constexpr std::int64_t now_us = 240 * minute_us;

Channel thermocouple() {
  return {"temperature", Role::temperature, Unit::degc, "main", 0, 1100, 60, 300, 600};
}

template <typename Value>
std::vector<Sample> minutes(int from, int to, Value value) {
  std::vector<Sample> samples;
  for (int m = from; m <= to; ++m) samples.push_back({m * minute_us, value(m)});
  return samples;
}

double scatter(int m) {
  std::mt19937 random(static_cast<unsigned>(m));
  return std::normal_distribution<double>(0, 1)(random);
}

Health health(const std::vector<Sample>& samples, const Channel& channel = thermocouple()) {
  return judge(channel, samples, {}, {}, now_us).health;
}

}  // namespace

TEST_CASE("a steady, slightly scattering channel is good, and its interval is known") {
  const auto samples = minutes(0, 240, [](int m) { return 930 + scatter(m); });
  const auto result = judge(thermocouple(), samples, {}, {}, now_us);
  CHECK(result.health == Health::good);
  CHECK(result.typical_interval_s == doctest::Approx(60));
}

TEST_CASE("silence is a gap first, then silence") {
  const auto course = [](int m) { return 930 + scatter(m); };
  CHECK(health(minutes(0, 234, course)) == Health::gap);
  CHECK(health(minutes(0, 225, course)) == Health::silent);
  CHECK(health({}) == Health::silent);
}

TEST_CASE("a value that stands still far longer than it used to is stuck; whole degrees are not") {
  CHECK(health(minutes(0, 240, [](int m) { return m < 200 ? 930 + scatter(m) : 931.25; })) == Health::stuck);
  // Whole degrees: stands for up to a quarter of an hour and is well.
  CHECK(health(minutes(0, 240, [](int m) { return std::floor(930 + 2 * std::sin(m / 12.0)); })) ==
        Health::good);
  // A channel that never moved has nothing to compare with.
  CHECK(health(minutes(0, 240, [](int) { return 930.0; })) == Health::good);
}

TEST_CASE("scatter beyond the instrument's is noise, a step beyond the furnace's is a jump") {
  CHECK(health(minutes(0, 240, [](int m) { return 930 + 8 * scatter(m); })) == Health::noisy);
  CHECK(health(minutes(0, 240, [](int m) { return (m < 230 ? 930 : 700) + scatter(m); })) == Health::jumping);
  // Heating up by 15 K a minute is no jump and no noise.
  CHECK(health(minutes(0, 240, [](int m) { return std::min(930.0, 15.0 * (m - 180)) + scatter(m); })) ==
        Health::good);
}

TEST_CASE("two thermocouples that stand apart while both stand still have drifted") {
  Channel load{"load", Role::load_temperature, Unit::degc, "main", 0, 1100, 60, 300, 600};
  const auto furnace = minutes(0, 240, [](int m) { return 930 + 0.3 * scatter(m); });
  const auto low = minutes(0, 240, [](int m) { return 908 + 0.3 * scatter(m + 1000); });
  const auto result = judge(load, low, {}, Partner{"temperature", furnace}, now_us);
  CHECK(result.health == Health::drifting);
  CHECK(result.sentence.find("temperature") != std::string::npos);
  // A load that is still coming up is behind its furnace, not adrift.
  const auto rising = minutes(0, 240, [](int m) { return 700 + 0.9 * m; });
  CHECK(judge(load, rising, {}, Partner{"temperature", furnace}, now_us).health == Health::good);
}

TEST_CASE("a marked stretch shows as masked") {
  const auto samples = minutes(0, 240, [](int m) { return 930 + scatter(m); });
  CHECK(judge(thermocouple(), samples, {{235 * minute_us, 250 * minute_us}}, {}, now_us).health ==
        Health::masked);
  CHECK(judge(thermocouple(), samples, {{35 * minute_us, 50 * minute_us}}, {}, now_us).health ==
        Health::good);
}

TEST_CASE("limits follow the channel's unit") {
  Channel fahrenheit = thermocouple();
  fahrenheit.unit = Unit::degf;
  CHECK(health(minutes(0, 240, [](int m) { return 1706 + 6 * scatter(m); }), fahrenheit) == Health::good);
  CHECK(health(minutes(0, 240, [](int m) { return 1706 + 14 * scatter(m); }), fahrenheit) == Health::noisy);
}

TEST_CASE("a push contact is not judged by its silence") {
  const Channel contact{"push", Role::push, Unit::count, "main", 0, 1e9, 60, 300, 600};
  CHECK(health({{0, 1}}, contact) == Health::good);
}
