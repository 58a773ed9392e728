// Burn-off, purge and calibration: what a channel shows then is not the furnace. How such stretches look is
// common practice, no source.
#include <doctest/doctest.h>

#include <limits>

#include "server/live/series.h"

using namespace hearthfront::server;

namespace {

constexpr std::int64_t minute_us = 60'000'000;

struct Probe {
  ChannelSeries series{300, 600, probe_in_air};
  std::vector<Sample> samples;

  void minute(int m, double mv) { samples.push_back({m * minute_us, mv}); }
  void steady(int from, int to, double mv) {
    for (int m = from; m <= to; ++m) minute(m, mv);
  }
  std::optional<std::int64_t> take() {
    return series.replace(0, std::numeric_limits<std::int64_t>::max(), samples);
  }
  Coverage cover(int from, int to) const { return series.cover(from * minute_us, to * minute_us); }
};

}  // namespace

TEST_CASE("a burn-off is recognised, and what the probe said before is carried over it") {
  Probe probe;
  probe.steady(0, 60, 1140);
  probe.steady(61, 66, 90);
  probe.steady(67, 120, 1142);
  probe.take();
  REQUIRE(probe.series.masks().size() == 1);
  const Coverage c = probe.cover(58, 70);
  CHECK(c.masked_s == doctest::Approx(7 * 60).epsilon(1e-6));
  CHECK(c.measured_s == doctest::Approx(5 * 60).epsilon(1e-6));
  CHECK(c.integral / c.known_s() == doctest::Approx(1141).epsilon(1e-3));
}

TEST_CASE("while it lasts it is masked; when it does not end it was none") {
  Probe probe;
  probe.steady(0, 60, 1140);
  probe.steady(61, 75, 90);
  probe.take();
  CHECK(probe.cover(61, 75).masked_s > 0);
  CHECK(probe.cover(61, 75).integral / probe.cover(61, 75).known_s() == doctest::Approx(1140));
  probe.steady(76, 110, 90);
  const auto changed = probe.take();
  // The half hour is over: the probe or the gas is what it shows, from the beginning.
  REQUIRE(changed.has_value());
  CHECK(*changed <= 61 * minute_us);
  CHECK(probe.series.masks().empty());
  CHECK(probe.cover(70, 100).integral / probe.cover(70, 100).known_s() == doctest::Approx(90));
}

TEST_CASE("the order in which readings come does not matter to the masks") {
  Probe whole;
  whole.steady(0, 60, 1140);
  whole.steady(61, 66, 90);
  whole.steady(67, 120, 1142);
  whole.take();
  ChannelSeries late(300, 600, probe_in_air);
  for (const int part : {2, 0, 3, 1}) {
    std::vector<Sample> some;
    for (const Sample& sample : whole.samples)
      if (sample.time_us / (30 * minute_us) == part || (part == 3 && sample.time_us >= 120 * minute_us))
        some.push_back(sample);
    late.replace(part * 30 * minute_us, (part + 1) * 30 * minute_us - 1 + (part == 3 ? minute_us : 0), some);
  }
  CHECK(late.masks() == whole.series.masks());
  CHECK(late.cover(0, 120 * minute_us).integral == whole.series.cover(0, 120 * minute_us).integral);
}

TEST_CASE("a lean gas is no burn-off: 0.4 % C reads only 45 mV below 0.8 %") {
  // The emf at 927 degC and 20 % CO: Nernst's law, see tests/solver.
  Probe probe;
  probe.steady(0, 60, 1139);
  probe.steady(61, 80, 1095);
  probe.steady(81, 120, 1139);
  probe.take();
  CHECK(probe.series.masks().empty());
}

TEST_CASE("an analyser on zero gas is masked, a marked stretch likewise, and touching ones are one") {
  ChannelSeries analyser(300, 600, analyser_on_zero_gas);
  std::vector<Sample> samples;
  for (int m = 0; m <= 60; ++m) samples.push_back({m * minute_us, m >= 20 && m < 26 ? 0.1 : 20.1});
  analyser.replace(0, 100 * minute_us, samples);
  REQUIRE(analyser.masks().size() == 1);
  CHECK(analyser.set_marks({{24 * minute_us, 40 * minute_us}}).has_value());
  REQUIRE(analyser.masks().size() == 1);
  CHECK(analyser.masks()[0].to_us == 40 * minute_us);
  CHECK_FALSE(analyser.set_marks({{24 * minute_us, 40 * minute_us}}).has_value());
  CHECK(analyser.set_marks({}).has_value());
  CHECK(analyser.masks()[0].to_us < 27 * minute_us);
}

TEST_CASE("a mark longer than a value can be held leaves the rest to the recipe") {
  ChannelSeries series(300, 600);
  std::vector<Sample> samples;
  for (int m = 0; m <= 60; ++m) samples.push_back({m * minute_us, 1.0});
  series.replace(0, 60 * minute_us, samples);
  series.set_marks({{10 * minute_us, 40 * minute_us}});
  const auto spans = series.spans(0, 60 * minute_us);
  REQUIRE(spans.size() == 4);
  CHECK(spans[1].basis == Basis::masked);
  CHECK(spans[2].basis == Basis::planned);
  CHECK(spans[2].to_us == 41 * minute_us);
}
