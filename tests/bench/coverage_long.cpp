// Prints how honest bands and chances are over thousands of invented loads, five fixed seeds; exit code 1
// where a band is not as honest as claimed. Never part of the tests (tests/outlook has the short form).
//   coverage_long [loads a seed, 2000]
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <vector>

#include "support/coverage.h"
#include "support/cpu_time.h"

using namespace hearthfront::testing;

namespace {

constexpr std::uint64_t seeds[] = {101, 202, 303, 404, 505};

bool priors_hold(std::size_t loads) {
  bool fine = true;
  for (const std::uint64_t seed : seeds) {
    const double begin = thread_seconds();
    std::vector<Tally> tallies{Tally(0), Tally(1), Tally(2)};
    for (std::size_t i = 0; i < loads; ++i) {
      const Verdicts verdicts = judge_by_priors(draw_load(seed * 1'000'000 + i), seed * 7'000'000 + i);
      for (Tally& tally : tallies) tally.add(verdicts);
    }
    std::printf("truth from the priors, seed %llu, %.0f s:\n", static_cast<unsigned long long>(seed),
                thread_seconds() - begin);
    for (const Tally& tally : tallies) {
      std::printf("  %s", tally.report().c_str());
      fine = fine && std::fabs(tally.coverage_pct() - 90) <= 2;
    }
    std::fflush(stdout);
  }
  return fine;
}

}  // namespace

int main(int argc, char** argv) {
  const std::size_t loads = argc > 1 ? std::strtoul(argv[1], nullptr, 10) : 2000;
  return priors_hold(loads) ? 0 : 1;
}
