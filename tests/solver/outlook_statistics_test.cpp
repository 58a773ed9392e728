// Band and chances of members, held against exact distributions.
#include <doctest/doctest.h>

#include <cmath>
#include <numbers>
#include <random>
#include <vector>

#include "solver/outlook/statistics.h"

using namespace hearthfront::solver;

namespace {

double normal_below(double z) {
  return 0.5 * std::erfc(-z / std::numbers::sqrt2);
}

std::vector<double> normals(std::size_t n, unsigned seed) {
  std::mt19937 random(seed);
  std::normal_distribution<double> normal(0, 1);
  std::vector<double> values(n);
  for (double& value : values) value = normal(random);
  return values;
}

}  // namespace

TEST_CASE("band: an unseen value falls into it in 90 of 100 cases, whatever the number of members") {
  // Exact for any continuous distribution: the chance of lying below the k-th of n is k/(n+1) (H. A. David,
  // H. N. Nagaraja, Order Statistics, 3rd ed., 2003). 40,000 cases: four standard errors are 0.006.
  std::mt19937 random(7);
  std::normal_distribution<double> normal(0, 1);
  for (const std::size_t n : {19UL, 39UL, 127UL}) {
    int inside = 0;
    constexpr int cases = 40'000;
    for (int i = 0; i < cases; ++i) {
      std::vector<double> members(n);
      for (double& member : members) member = normal(random);
      const Band band = band_of(members);
      const double truth = normal(random);
      inside += truth >= band.low && truth <= band.high;
    }
    CHECK(static_cast<double>(inside) / cases == doctest::Approx(0.9).epsilon(0.0067));
  }
}

TEST_CASE("band: out of reach of few members is said as no number, never as the extreme member") {
  std::vector<double> few{1, 2, 3};
  CHECK(std::isnan(quantile(few, 0.05)));
  CHECK(quantile(few, 0.5) == 2);
}

TEST_CASE("chance: smoothing neither moves nor widens a normal distribution") {
  const std::vector<double> members = normals(4000, 3);
  const SmoothedMembers smoothed(members);
  double mean = 0, square = 0;
  for (const double member : members) mean += member / 4000;
  for (const double member : members) square += (member - mean) * (member - mean) / 3999;
  for (const double z : {-2.0, -1.0, -0.3, 0.0, 0.8, 1.6}) {
    const double exact = normal_below((z - mean) / std::sqrt(square));
    CHECK(smoothed.chance_below(z) == doctest::Approx(exact).epsilon(0.02).scale(0.5));
  }
}

TEST_CASE("chance: it does not step by one member when a limit passes one") {
  const std::vector<double> members = normals(127, 11);
  const SmoothedMembers smoothed(members);
  double largest = 0;
  for (double z = -2; z < 2; z += 0.002)
    largest = std::max(largest, smoothed.chance_below(z + 0.002) - smoothed.chance_below(z));
  CHECK(largest < 0.2 / 127);
}

TEST_CASE("chance: what a laboratory would measure is wider by its own scatter") {
  const std::vector<double> members = normals(4000, 5);
  const SmoothedMembers measured(members, 1.0);
  // A normal and an independent normal of the same width: width sqrt(2).
  CHECK(measured.chance_below(1.5) == doctest::Approx(normal_below(1.5 / std::numbers::sqrt2)).epsilon(0.03));
}

TEST_CASE("chance: members that are all alike give certainty") {
  const std::vector<double> members(127, 0.8);
  const SmoothedMembers smoothed(members);
  CHECK(smoothed.chance_below(0.9) == 1);
  CHECK(smoothed.chance_below(0.7) == 0);
}
