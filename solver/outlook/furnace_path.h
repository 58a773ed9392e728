// What a furnace will show along a plan: its set points, ramps included, followed with its own sluggishness,
// and the present offset carried on and decaying.
#pragma once

#include <vector>

#include "solver/outlook/outlook.h"

namespace hearthfront::solver {

class FurnacePath {
 public:
  // `before`: the set points that the plan's first segment ramps from; what is left of a ramp is in the plan.
  FurnacePath(const std::vector<PlannedSegment>& plan, const FurnaceResponse& furnace);

  // A step that the furnace's changes are well resolved by: at most `longest_s`, within segment `segment`
  // that began `elapsed_s` ago.
  double step_s(std::size_t segment, double elapsed_s, double longest_s) const;
  // Means over the next `duration_s`; moves on.
  struct Shown {
    double temperature_degc = 0, carbon_potential_wt_pct = 0;
  };
  Shown advance(std::size_t segment, double elapsed_s, double duration_s);
  double shown_degc() const { return followed_degc_ + furnace_.offset_k; }  // at this moment

 private:
  Shown set_points(std::size_t segment, double elapsed_s) const;

  const std::vector<PlannedSegment>& plan_;
  FurnaceResponse furnace_;
  double followed_degc_, followed_wt_pct_;  // without the offsets
};

}  // namespace hearthfront::solver
