// Prints how honest bands and chances are over thousands of invented loads, five fixed seeds; exit code 1
// where they are not as honest as claimed. Never part of the tests (tests/outlook has the short form).
//   coverage_long [priors|wrong|split] [loads a seed]
//     priors   truth drawn from the priors: 90 +/- 2 % in the band, chances come true (2000)
//     wrong    another diffusivity, drift, noise, gaps, an operator who departs: at least 80 % (1000)
//     split    the same, each ingredient alone and all but each, first seed (400)
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <functional>
#include <vector>

#include "support/binomial.h"
#include "support/coverage.h"
#include "support/cpu_time.h"

using namespace hearthfront::testing;

namespace {

constexpr std::uint64_t seeds[] = {101, 202, 303, 404, 505};
using Judge = std::function<Verdicts(const SyntheticLoad&, std::uint64_t)>;

std::vector<Tally> judged(std::uint64_t seed, std::size_t loads, const Judge& judge) {
  std::vector<Tally> tallies{Tally(0), Tally(1), Tally(2)};
  for (std::size_t i = 0; i < loads; ++i) {
    const Verdicts verdicts = judge(draw_load(seed * 1'000'000 + i), seed * 7'000'000 + i);
    for (Tally& tally : tallies) tally.add(verdicts);
  }
  return tallies;
}

void print(const std::vector<Tally>& tallies) {
  for (const Tally& tally : tallies) std::printf("  %s", tally.report().c_str());
  std::fflush(stdout);
}

bool priors_hold(std::size_t loads) {
  bool fine = true;
  Tally::Missing all;
  for (const std::uint64_t seed : seeds) {
    const double begin = thread_seconds();
    const auto tallies = judged(seed, loads, judge_by_priors);
    std::printf("truth from the priors, seed %llu, %.0f s:\n", static_cast<unsigned long long>(seed),
                thread_seconds() - begin);
    print(tallies);
    for (const Tally& tally : tallies) fine = fine && std::fabs(tally.coverage_pct() - 90) <= 2;
    // The looks at one load are not independent: chances are counted at the middle one.
    const Tally::Missing missing = tallies[1].outside_99();
    all.deciles += missing.deciles;
    all.outside += missing.outside;
  }
  // Of perfect chances one decile in a hundred misses its 99 % interval.
  const bool chances_hold = binomial_up_to(all.outside, all.deciles, 0.01) < 0.995;
  std::printf("deciles outside their 99 %% interval: %zu of %zu, %s\n", all.outside, all.deciles,
              chances_hold ? "as many as by chance" : "too many");
  return fine && chances_hold;
}

const WrongWorld everything{true, true, true, true, true};

bool wrong_holds(std::size_t loads) {
  bool fine = true;
  for (const std::uint64_t seed : seeds) {
    const double begin = thread_seconds();
    const auto tallies = judged(seed, loads, [](const SyntheticLoad& load, std::uint64_t own) {
      return judge_in(everything, load, own);
    });
    std::printf("wrong world, seed %llu, %.0f s:\n", static_cast<unsigned long long>(seed),
                thread_seconds() - begin);
    print(tallies);
    for (const Tally& tally : tallies) fine = fine && tally.coverage_pct() >= 80;
  }
  return fine;
}

void split(std::size_t loads) {
  struct Ingredient {
    const char* name;
    bool WrongWorld::*member;
  };
  const Ingredient ingredients[] = {{"Tibbetts' D", &WrongWorld::other_diffusivity},
                                    {"drifting readings", &WrongWorld::drifting_readings},
                                    {"noise and wander", &WrongWorld::noisy_readings},
                                    {"gaps", &WrongWorld::gaps},
                                    {"operator departs", &WrongWorld::departing_operator}};
  const auto run = [&](const WrongWorld& world) {
    print(judged(seeds[0], loads,
                 [&](const SyntheticLoad& load, std::uint64_t own) { return judge_in(world, load, own); }));
  };
  std::printf("nothing wrong, truth by the plain integrator:\n");
  run({});
  for (const Ingredient& each : ingredients) {
    WrongWorld alone, without = everything;
    alone.*each.member = true;
    without.*each.member = false;
    std::printf("%s alone:\n", each.name);
    run(alone);
    std::printf("all but %s:\n", each.name);
    run(without);
  }
}

}  // namespace

int main(int argc, char** argv) {
  const char* what = argc > 1 ? argv[1] : "";
  const auto loads = [&](std::size_t usual) {
    return argc > 2 ? std::size_t{std::strtoul(argv[2], nullptr, 10)} : usual;
  };
  bool fine = true;
  if (!*what || !std::strcmp(what, "priors")) fine = priors_hold(loads(2000)) && fine;
  if (!*what || !std::strcmp(what, "wrong")) fine = wrong_holds(loads(1000)) && fine;
  if (!std::strcmp(what, "split")) split(loads(400));
  return fine ? 0 : 1;
}
