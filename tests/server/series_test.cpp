// How readings become inputs: straight lines, carried values, held, planned. Expected numbers are worked
// by hand from the rule in server/live/series.h; the rule itself is ours (common practice, no source).
#include "server/live/series.h"

#include <doctest/doctest.h>

#include <algorithm>
#include <random>

using namespace hearthfront::server;

namespace {

constexpr std::int64_t s = 1'000'000;

ChannelSeries series_of(const std::vector<Sample>& samples) {
  ChannelSeries series(300, 600);
  series.replace(0, 1'000'000 * s, samples);
  return series;
}

}  // namespace

TEST_CASE("between two readings in time the value is the straight line") {
  const auto series = series_of({{0, 900}, {60 * s, 930}});
  const Coverage c = series.cover(0, 60 * s);
  CHECK(c.measured_s == doctest::Approx(60));
  CHECK(c.held_s == 0);
  CHECK(c.integral / c.known_s() == doctest::Approx(915));
  CHECK(series.cover(30 * s, 60 * s).integral / 30 == doctest::Approx(922.5));
}

TEST_CASE("a mean is weighted by time, not by the number of readings") {
  // 10 s at 1.0 falling to 0.0, then 50 s rising to 1.0: mean 0.5 of both.
  const auto series = series_of({{0, 1.0}, {10 * s, 0.0}, {60 * s, 1.0}});
  CHECK(series.cover(0, 60 * s).integral == doctest::Approx(30));
}

TEST_CASE("in a gap the value is carried as measured, then held, then the channel is silent") {
  const auto series = series_of({{0, 900}, {1500 * s, 950}});
  const auto spans = series.spans(0, 1500 * s);
  REQUIRE(spans.size() == 3);
  CHECK(spans[0].basis == Basis::measured);
  CHECK(spans[0].to_us == 300 * s);
  CHECK(spans[1].basis == Basis::held);
  CHECK(spans[1].to_us == 600 * s);
  CHECK(spans[2].basis == Basis::planned);
  CHECK(spans[2].to_us == 1500 * s);
  const Coverage c = series.cover(0, 1500 * s);
  CHECK(c.measured_s == doctest::Approx(300));
  CHECK(c.held_s == doctest::Approx(300));
  CHECK(c.integral == doctest::Approx(600 * 900.0));
}

TEST_CASE("before the first reading and with none the channel is silent") {
  const auto series = series_of({{600 * s, 900}});
  CHECK(series.cover(0, 600 * s).known_s() == 0);
  CHECK(series.spans(0, 600 * s).front().basis == Basis::planned);
  const ChannelSeries empty(300, 600);
  CHECK(empty.cover(0, 60 * s).known_s() == 0);
  CHECK_FALSE(empty.newest(60 * s));
}

TEST_CASE("after the last reading it is carried like in a gap, however far one asks") {
  const auto series = series_of({{0, 900}});
  CHECK(series.cover(0, 200 * s).measured_s == doctest::Approx(200));
  const Coverage c = series.cover(0, 5000 * s);
  CHECK(c.measured_s == doctest::Approx(300));
  CHECK(c.held_s == doctest::Approx(300));
}

TEST_CASE("the cover of a stretch is the sum of the covers of its parts") {
  std::mt19937 random(7);
  std::vector<Sample> samples;
  for (std::int64_t t = 0; t < 20'000; t += std::uniform_int_distribution<int>(1, 900)(random))
    samples.push_back({t * s, std::uniform_real_distribution<double>(800, 950)(random)});
  const auto series = series_of(samples);
  double integral = 0, known = 0;
  for (std::int64_t t = 0; t < 20'000; t += 60) {
    const Coverage c = series.cover(t * s, (t + 60) * s);
    integral += c.integral;
    known += c.known_s();
  }
  const Coverage whole = series.cover(0, 20'040 * s);
  CHECK(integral == doctest::Approx(whole.integral).epsilon(1e-12));
  CHECK(known == doctest::Approx(whole.known_s()).epsilon(1e-12));
}

TEST_CASE("replace tells from when on the series speaks differently") {
  ChannelSeries series(300, 600);
  CHECK(series.replace(0, 1000 * s, {{100 * s, 1}, {200 * s, 2}, {300 * s, 3}}) == 100 * s);
  SUBCASE("nothing new, nothing changed") {
    CHECK_FALSE(series.replace(0, 1000 * s, {{100 * s, 1}, {200 * s, 2}, {300 * s, 3}}));
    CHECK_FALSE(series.replace(150 * s, 250 * s, {{200 * s, 2}}));
  }
  SUBCASE("a reading between two changes the line from the one before") {
    CHECK(series.replace(250 * s, 250 * s, {{250 * s, 9}}) == 200 * s);
  }
  SUBCASE("a value set aside (two values for one time) changes it too") {
    CHECK(series.replace(200 * s, 200 * s, {}) == 100 * s);
    CHECK(series.newest(299 * s)->time_us == 100 * s);
  }
  SUBCASE("a later one changes from the last one on") {
    CHECK(series.replace(400 * s, 400 * s, {{400 * s, 4}}) == 300 * s);
  }
}
