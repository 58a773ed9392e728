// What an ensemble is drawn from, and how evenly. Priors and their sources stand in solver/outlook/draws.h;
// here the draws are held against them.
#include <doctest/doctest.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>
#include <stdexcept>
#include <vector>

#include "solver/outlook/draws.h"

using namespace hearthfront::solver;

namespace {

constexpr std::uint64_t seed = 2606;

struct Spread {
  double mean = 0, sd = 0;
};

template <class Of>
Spread spread_of(const ItemDraws& draws, Of of) {
  Spread spread;
  const auto n = static_cast<double>(draws.lanes.size() - 1);
  for (std::size_t lane = 1; lane < draws.lanes.size(); ++lane) spread.mean += of(lane) / n;
  for (std::size_t lane = 1; lane < draws.lanes.size(); ++lane)
    spread.sd += (of(lane) - spread.mean) * (of(lane) - spread.mean) / (n - 1);
  spread.sd = std::sqrt(spread.sd);
  return spread;
}

double rectangular_sd(double half_width) {
  return half_width / std::sqrt(3.0);
}

// The criterion that draws.cpp names, for a generator of a lattice of `n` points.
double weighted_p2(std::size_t n, std::size_t generator) {
  constexpr std::size_t coordinates = 9;
  std::vector<double> term(n);
  for (std::size_t i = 0; i < n; ++i) {
    const double x = static_cast<double>(i) / static_cast<double>(n);
    term[i] = 2 * std::numbers::pi * std::numbers::pi * (x * x - x + 1.0 / 6.0);
  }
  std::array<std::size_t, coordinates> multiple{};
  std::size_t power = 1;
  for (auto& each : multiple) {
    each = power;
    power = power * generator % n;
  }
  double sum = 0;
  for (std::size_t i = 0; i < n; ++i) {
    double product = 1, weight = 1;
    for (const std::size_t each : multiple) {
      product *= 1 + weight * term[i * each % n];
      weight *= 0.6;
    }
    sum += product;
  }
  return sum / static_cast<double>(n) - 1;
}

}  // namespace

TEST_CASE("draws: every parameter has the spread its prior states") {
  const Priors priors;
  const ItemDraws draws = draw_members(priors, {{true}}, seed, confirming_members).front();
  const auto near = [](const Spread& spread, double mean, double sd) {
    CHECK(spread.mean == doctest::Approx(mean).epsilon(0.02 * sd + 1e-9).scale(1));
    CHECK(spread.sd == doctest::Approx(sd).epsilon(0.02));
  };
  near(spread_of(draws, [&](std::size_t l) { return std::log(draws.lanes[l].beta_scale); }), 0,
       priors.beta_sd_ln);
  near(spread_of(draws, [&](std::size_t l) { return std::log(draws.lanes[l].diffusivity_scale); }), 0,
       priors.diffusivity_sd_ln);
  near(spread_of(draws, [&](std::size_t l) { return std::log(draws.lanes[l].lag_scale); }), 0,
       priors.lag_sd_ln);
  near(spread_of(draws, [&](std::size_t l) { return draws.lanes[l].thermocouple_offset_k; }), 0,
       rectangular_sd(priors.thermocouple_half_width_k));
  near(spread_of(draws, [&](std::size_t l) { return draws.lanes[l].temperature_offset_k; }), 0,
       rectangular_sd(priors.uniformity_half_width_k));
  near(spread_of(draws, [&](std::size_t l) { return draws.lanes[l].core_carbon_offset_wt_pct; }), 0,
       rectangular_sd(priors.core_carbon_half_width_wt_pct));
  near(spread_of(draws, [&](std::size_t l) { return draws.criterion_offset_wt_pct[l]; }), 0,
       priors.criterion_sd_wt_pct);
  for (const auto error :
       {&Member::carbon_source_error, &Member::temperature_gap_error, &Member::carbon_potential_gap_error,
        &Member::future_temperature_error, &Member::future_carbon_potential_error})
    near(spread_of(draws, [&](std::size_t l) { return draws.lanes[l].*error; }), 0, 1);
}

TEST_CASE("draws: lane 0 is the nominal part, and a criterion that names its carbon has no doubt") {
  const auto draws = draw_members({}, {{false}}, seed);
  REQUIRE(draws.front().lanes.size() == ensemble_members + 1);
  CHECK(draws.front().lanes[0].beta_scale == 1);
  CHECK(draws.front().lanes[0].thermocouple_offset_k == 0);
  for (const double offset : draws.front().criterion_offset_wt_pct) CHECK(offset == 0);
}

TEST_CASE("draws: items share the furnace and have their own lag, position, core and film") {
  const auto draws = draw_members({}, {{true}, {true}}, seed);
  double together = 0, n = 0;
  for (std::size_t lane = 1; lane < draws[0].lanes.size(); ++lane) {
    const Member &a = draws[0].lanes[lane], &b = draws[1].lanes[lane];
    CHECK(a.beta_scale == b.beta_scale);
    CHECK(a.thermocouple_offset_k == b.thermocouple_offset_k);
    CHECK(a.carbon_source_error == b.carbon_source_error);
    together += a.temperature_offset_k * b.temperature_offset_k;
    n += 1;
  }
  // Independent ones: the correlation of 127 pairs is within 0.25 at 99.5 % (Fisher's z).
  const double variance = 6.0 * 6.0 / 3.0;
  CHECK(std::fabs(together / n / variance) < 0.25);
}

TEST_CASE("draws: the same seed gives the same members, whatever items follow; another seed others") {
  const auto one = draw_members({}, {{true}}, seed), two = draw_members({}, {{true}, {false}}, seed);
  for (std::size_t lane = 0; lane < one[0].lanes.size(); ++lane) {
    CHECK(one[0].lanes[lane].beta_scale == two[0].lanes[lane].beta_scale);
    CHECK(one[0].lanes[lane].lag_scale == two[0].lanes[lane].lag_scale);
  }
  CHECK(draw_members({}, {{true}}, seed + 1)[0].lanes[5].beta_scale != one[0].lanes[5].beta_scale);
}

TEST_CASE("draws: the lattices' generators are the best there are by their own criterion") {
  // I. H. Sloan, S. Joe, Lattice Methods for Multiple Integration, 1994, chapter 4: P2 by exhaustive search.
  for (const auto& [members, chosen] : {std::pair<std::size_t, std::size_t>{ensemble_members, 36},
                                        std::pair<std::size_t, std::size_t>{confirming_members, 391}}) {
    const double best = weighted_p2(members, chosen);
    for (std::size_t generator = 2; generator <= members / 2; ++generator)
      CHECK(weighted_p2(members, generator) > best - 1e-12);
  }
}

TEST_CASE("draws: another number of members is refused") {
  CHECK_THROWS_AS(draw_members({}, {{true}}, seed, 100), std::invalid_argument);
}

TEST_CASE("draws: an input that is not measured is less and less sure, up to a bound") {
  CHECK(temperature_gap_sd_k(0) == 0);
  CHECK(temperature_gap_sd_k(3600) == doctest::Approx(5));
  CHECK(temperature_gap_sd_k(900) == doctest::Approx(2.5));
  CHECK(temperature_gap_sd_k(1e7) == doctest::Approx(15));
  CHECK(carbon_potential_gap_sd_wt_pct(3600) == doctest::Approx(0.04));
  CHECK(carbon_potential_gap_sd_wt_pct(1e7) == doctest::Approx(0.12));
}
