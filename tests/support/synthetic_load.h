// Invented loads for tests of the outlook: steel, section, recipe, criterion and window drawn from a seed,
// and what a logger of their furnace would show. Ranges are those of ordinary gas carburizing, 1 to 12 h at
// 880-980 degC (common practice, no source).
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "solver/outlook/outlook.h"
#include "solver/solver.h"

namespace hearthfront::testing {

// No reading in [from, to), minutes from the load's start.
struct Gap {
  int from_minute = 0, to_minute = 0;
};

struct SyntheticLoad {
  std::string steel;
  solver::CarburizingPart part;
  solver::MeshDensity density;
  solver::Priors priors;
  std::vector<solver::PlannedSegment> recipe;  // whole minutes; heat up, boost, diffuse, often equalize
  double criterion_wt_pct = 0.35;
  bool hardness_criterion = true;
  bool load_thermocouple = false;
  solver::Window window_m{0, 0};  // around the depth that the nominal part would reach, wide and narrow, off
                                  // to either side
  // What the furnace shows beside its set points, and how it follows them.
  double offset_k = 0, offset_wt_pct = 0;
  // The instrument of the carbon potential.
  double carbon_potential_per_k = 0, carbon_source_sd_wt_pct = 0.025;
  std::vector<Gap> gaps;

  int minutes() const;  // of the recipe
  bool in_gap(int minute) const;
};

inline constexpr double charge_temperature_degc = 20;  // of the parts
inline constexpr double furnace_start_degc = 860;      // after the door has closed
inline constexpr double furnace_start_wt_pct = 0.4;

SyntheticLoad draw_load(std::uint64_t seed);

// What a furnace does along a recipe in minutes: first-order behind the set points, heating no faster than
// 0.15 K/s. Written apart from solver/outlook/furnace_path, for the same law (solver::FurnaceResponse).
class FurnaceTrack {
 public:
  FurnaceTrack(double temperature_degc, double carbon_potential_wt_pct)
      : degc_(temperature_degc), wt_pct_(carbon_potential_wt_pct) {}
  struct Mean {
    double temperature_degc, carbon_potential_wt_pct;
  };
  Mean minute(double set_degc, double set_wt_pct);
  double degc() const { return degc_; }
  double wt_pct() const { return wt_pct_; }

 private:
  double degc_, wt_pct_;
};

// Set points in the middle of a minute of a recipe, ramps included; the last segment's stay on after the end.
FurnaceTrack::Mean set_points(const std::vector<solver::PlannedSegment>& recipe, int minute);

// What is left of `planned` when `actual` (the same segments, other lengths) has run for `minute`.
std::vector<solver::PlannedSegment> rest_of(const std::vector<solver::PlannedSegment>& planned,
                                            const std::vector<solver::PlannedSegment>& actual, int minute);

// A minute as the server hands it to the model: measured, or in a gap held for 20 min and then planned, with
// the doubts of both.
class LogToInputs {
 public:
  explicit LogToInputs(const SyntheticLoad& load) : load_(load) {}
  solver::IntervalInputs measured(FurnaceTrack::Mean reading, double load_degc);
  solver::IntervalInputs missing(FurnaceTrack::Mean planned);

 private:
  solver::InputDoubt doubt() const;

  const SyntheticLoad& load_;
  solver::IntervalInputs last_;
  double missing_s_ = 0;
};

}  // namespace hearthfront::testing
