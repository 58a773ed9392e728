// One plan tried on the nominal parts, its last free length found along the way. Private to solver/outlook.
#pragma once

#include <memory>
#include <vector>

#include "solver/outlook/member_spread.h"
#include "solver/outlook/search.h"
#include "solver/outlook/walk.h"

namespace hearthfront::solver {

// How good a plan is; better ones compare smaller.
struct PlanScore {
  bool reaches = false;
  double duration_s = 0, chance = 0, distance = 0;
  bool better_than(const PlanScore& other) const;
};

class PlanTrials {
 public:
  PlanTrials(const std::vector<OutlookItem>& items, const std::vector<SegmentFreedom>& freedom,
             const FurnaceResponse& furnace, const IntervalInputs& now, double longest_s);

  // What counts from here on.
  void set_goal(const MemberSpread& spread, double chance);
  // Sets the length of the last free segment in `plan`. Plans longer than `give_up_s` are not followed
  // further.
  PlanScore try_plan(std::vector<PlannedSegment>& plan, double give_up_s);
  int tried() const { return tried_; }

 private:
  struct Found {
    double length_s = 0;
    PlanScore score;
  };
  PlanScore score_at_end(const Walk& walk, const std::vector<PlannedSegment>& plan, std::size_t from) const;
  Found first_reaching(const Walk& before, const std::vector<PlannedSegment>& plan, double low_s,
                       double high_s) const;
  Found along(Walk& walk, const std::vector<PlannedSegment>& plan, double most_s) const;

  std::vector<GasCarburizing> models_;
  std::vector<GasCarburizing::State> states_;
  std::vector<std::vector<double>> no_offset_;
  std::vector<OutlookItem> items_;
  const FurnaceResponse& furnace_;
  const IntervalInputs& now_;
  double longest_s_;
  std::size_t free_length_;  // segment whose length is found; the number of segments where none is free
  double shortest_s_ = 0;
  const MemberSpread* spread_ = nullptr;
  double goal_ = 0;
  int tried_ = 0;
};

}  // namespace hearthfront::solver
