// How honest bands and chances are: over invented loads, a band of 5 to 95 % must hold nine truths of ten,
// and what is given a chance of 30 % must happen three times of ten. Short forms with one seed each;
// coverage_long has thousands of loads (DEVELOPERS.md).
#include "support/coverage.h"

#include <doctest/doctest.h>

#include <cmath>

#include "support/binomial.h"

using namespace hearthfront::testing;

TEST_CASE("exact binomial tails") {
  // By hand: (1/2)^3 and 4 (1/2)^3 of three throws; all or none.
  CHECK(binomial_up_to(0, 3, 0.5) == doctest::Approx(0.125));
  CHECK(binomial_up_to(1, 3, 0.5) == doctest::Approx(0.5));
  CHECK(binomial_up_to(3, 3, 0.3) == 1);
  // Clopper and Pearson's interval of 0 out of 30 at 99 % ends at 1 - 0.005^(1/30) = 0.1619.
  CHECK(binomial_agrees(0, 30, 0.161, 0.99));
  CHECK_FALSE(binomial_agrees(0, 30, 0.163, 0.99));
  CHECK_FALSE(binomial_agrees(30, 30, 0.83, 0.99));
}

TEST_CASE("a member means what its errors say: the plain integrator reaches the same depth") {
  // Both within 0.5 um of their equations; the model pauses and starts on whole minutes, as the other does.
  for (std::uint64_t i = 0; i < 40; ++i) {
    CAPTURE(i);
    const SameTruth truth = truth_twice(draw_load(9000 + i), 77 + i);
    CHECK(std::fabs(truth.by_model_m - truth.by_plain_m) < 1e-6);
  }
}

TEST_CASE("truth from the priors: the band holds it in 90 % of loads, and chances come true") {
  constexpr std::size_t loads = 300;
  std::vector<Tally> tallies{Tally(0), Tally(1), Tally(2)};
  for (std::size_t i = 0; i < loads; ++i) {
    const Verdicts verdicts = judge_by_priors(draw_load(1000 + i), 5000 + i);
    for (Tally& tally : tallies) tally.add(verdicts);
  }
  for (const Tally& tally : tallies) {
    CAPTURE(tally.report());
    CHECK(std::fabs(tally.coverage_pct() - 90) <= 5);  // 2.9 standard deviations of 300 loads
    // One decile in a hundred misses its 99 % interval even where all are right.
    const Tally::Missing missing = tally.outside_99();
    CHECK(missing.deciles >= 8);
    CHECK(binomial_up_to(missing.outside, missing.deciles, 0.01) < 0.995);
  }
}

TEST_CASE("wrong diffusivity, drift, noise, gaps, an operator who departs: the band still holds 80 %") {
  std::vector<Tally> tallies{Tally(0), Tally(1), Tally(2)};
  for (std::size_t i = 0; i < 150; ++i) {
    const Verdicts verdicts = judge_in({true, true, true, true, true}, draw_load(3000 + i), 7000 + i);
    for (Tally& tally : tallies) tally.add(verdicts);
  }
  for (const Tally& tally : tallies) {
    CAPTURE(tally.report());
    CHECK(tally.coverage_pct() >= 80);
  }
}
