#include <algorithm>
#include <cstdio>

#include "support/binomial.h"
#include "support/coverage.h"

namespace hearthfront::testing {
namespace {

std::size_t tenth(double share) {
  return std::min<std::size_t>(9, static_cast<std::size_t>(std::max(0.0, share) * 10));
}

constexpr std::size_t enough_cases = 30;

}  // namespace

void Tally::add(const Verdicts& verdicts) {
  const Verdict& verdict = verdicts[look_];
  ++loads_;
  covered_ += verdict.covered() ? 1U : 0U;
  width_pct_ += 100 * (verdict.band_m.high - verdict.band_m.low) / verdict.band_m.median;
  ++histogram_[tenth(verdict.below_truth)];
  const bool is_shallow = verdict.truth_m < verdict.window_m.first;
  const bool is_deep = verdict.truth_m > verdict.window_m.second;
  const auto note = [&](Chance chance, double stated, bool hit) {
    Decile& decile = deciles_[chance][tenth(stated)];
    ++decile.cases;
    decile.hits += hit ? 1U : 0U;
    decile.stated += stated;
  };
  note(inside, verdict.chance.inside, !is_shallow && !is_deep);
  note(shallow, verdict.chance.below, is_shallow);
  note(deep, verdict.chance.above, is_deep);
}

std::array<Tally::Decile, 10> Tally::deciles(Chance chance) const {
  auto deciles = deciles_[chance];
  for (Decile& each : deciles)
    if (each.cases > 0) each.stated /= static_cast<double>(each.cases);
  return deciles;
}

Tally::Missing Tally::outside_99() const {
  Missing missing;
  for (const Chance chance : {inside, shallow, deep})
    for (const Decile& each : deciles(chance)) {
      if (each.cases < enough_cases) continue;
      ++missing.deciles;
      missing.outside += binomial_agrees(each.hits, each.cases, each.stated, 0.99) ? 0U : 1U;
    }
  return missing;
}

std::string Tally::report() const {
  char line[200];
  std::snprintf(line, sizeof line,
                "at %2.0f %%: coverage %.2f %% of %zu, band %.1f %% of the median wide; tenths",
                100 * looked_at[look_], coverage_pct(), loads_, mean_width_pct());
  std::string text = line;
  for (const std::size_t count : histogram_) text += " " + std::to_string(count);
  const Missing missing = outside_99();
  std::snprintf(line, sizeof line, "; deciles of chances outside 99 %%: %zu of %zu\n", missing.outside,
                missing.deciles);
  text += line;
  const char* names[] = {"inside", "shallow", "deep"};
  for (const Chance chance : {inside, shallow, deep})
    for (const Decile& each : deciles(chance)) {
      if (each.cases < enough_cases || binomial_agrees(each.hits, each.cases, each.stated, 0.99)) continue;
      std::snprintf(line, sizeof line, "    %s: stated %.3f, came true %.3f of %zu\n", names[chance],
                    each.stated, static_cast<double>(each.hits) / static_cast<double>(each.cases),
                    each.cases);
      text += line;
    }
  return text;
}

}  // namespace hearthfront::testing
