// One load, a truth, and what the outlook said of it on the way: for tests of how honest bands and chances
// are.
#pragma once

#include <array>
#include <cstddef>
#include <cstdint>
#include <string>
#include <vector>

#include "support/synthetic_load.h"

namespace hearthfront::testing {

// What the outlook said when a share of the cycle was over, and what came of it.
struct Verdict {
  solver::Band band_m;
  solver::WindowChance chance;
  solver::Window window_m;
  double truth_m = 0;      // case depth at the true criterion when the cycle ends
  double below_truth = 0;  // chance that the outlook gave to a depth below the true one
  bool covered() const { return truth_m >= band_m.low && truth_m <= band_m.high; }
};
inline constexpr std::array<double, 3> looked_at{0.25, 0.50, 0.75};
using Verdicts = std::array<Verdict, looked_at.size()>;

// The truth is a member drawn from the load's own priors, advanced by the model itself, alone, over the same
// readings; from each look on it goes along the plan in minutes with errors of its own.
Verdicts judge_by_priors(const SyntheticLoad& load, std::uint64_t seed);

// The truth of a world the model does not know, by the plain integrator; each ingredient apart. What the
// priors know of (beta, couple, instrument, position, core, lag, film, criterion) is drawn from them always.
struct WrongWorld {
  bool other_diffusivity = false;   // Tibbetts instead of Agren
  bool drifting_readings = false;   // couple 1-2 K/h, instrument up to 0.02 wt%/h, either way, unseen
  bool noisy_readings = false;      // 1 K and 0.01 wt%; the furnace itself wanders by 2 K and 0.015 wt%
  bool gaps = false;                // the load's own
  bool departing_operator = false;  // a segment 10-20 % longer, or 0.05 wt% off: one load in three each
};
Verdicts judge_in(const WrongWorld& world, const SyntheticLoad& load, std::uint64_t seed);

// One true member's end depth over a whole load: by the model alone in its lane, and by the plain integrator
// with every error of the member spelled out again. For the test that both mean the same.
struct SameTruth {
  double by_model_m, by_plain_m;
};
SameTruth truth_twice(const SyntheticLoad& load, std::uint64_t seed);
double plain_depth_m(const SyntheticLoad& load, const solver::TrueMember& truth,
                     const std::vector<solver::IntervalInputs>& inputs);

// Shares over many loads.
class Tally {
 public:
  explicit Tally(std::size_t look) : look_(look) {}
  void add(const Verdicts& verdicts);
  std::size_t size() const { return loads_; }
  double coverage_pct() const { return 100 * static_cast<double>(covered_) / static_cast<double>(loads_); }
  // Truths in each tenth of what the outlook thought possible: all alike where it is honest.
  const std::array<std::size_t, 10>& histogram() const { return histogram_; }
  double mean_width_pct() const { return width_pct_ / static_cast<double>(loads_); }  // of the median

  struct Decile {
    std::size_t cases = 0, hits = 0;
    double stated = 0;  // mean of the stated chances
  };
  enum Chance : std::size_t { inside, shallow, deep };
  std::array<Decile, 10> deciles(Chance chance) const;
  // Lines for people: coverage, histogram, deciles that are outside their 99 % interval.
  std::string report() const;
  // Of deciles with 30 cases or more: how many, and how many miss their exact 99 % interval.
  struct Missing {
    std::size_t deciles = 0, outside = 0;
  };
  Missing outside_99() const;

 private:
  std::size_t look_, loads_ = 0, covered_ = 0;
  double width_pct_ = 0;
  std::array<std::size_t, 10> histogram_{};
  std::array<std::array<Decile, 10>, 3> deciles_{};
};

}  // namespace hearthfront::testing
