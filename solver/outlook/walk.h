// The items of a load on their way along a plan: furnace, parts and members together. Private to
// solver/outlook.
#pragma once

#include <vector>

#include "solver/outlook/furnace_path.h"
#include "solver/outlook/outlook.h"

namespace hearthfront::solver {

class Walk {
 public:
  // What is referred to must outlive the walk. `now` as in `project`.
  Walk(const std::vector<OutlookItem>& items, const std::vector<PlannedSegment>& plan,
       const FurnaceResponse& furnace, const IntervalInputs& now, double longest_step_s);
  Walk(const Walk& other);
  Walk& operator=(const Walk&) = delete;

  const std::vector<OutlookItem>& items() const { return items_; }
  double at_s() const { return at_s_; }
  bool failed() const { return failed_; }

  // One step from `elapsed_s` into `segment` on, at most `most_s` long; returns its length.
  double step(std::size_t segment, double elapsed_s, double most_s);
  // To the end of the segment from its beginning, or until what ends it is due.
  void whole(std::size_t segment);
  // `duration_s` further in the segment.
  void further(std::size_t segment, double elapsed_s, double duration_s);
  // Whether what ends the segment has happened.
  bool due(std::size_t segment) const;

 private:
  void bind();

  const std::vector<PlannedSegment>* plan_;
  double longest_step_s_;
  std::vector<OutlookItem> items_;
  FurnacePath path_;
  IntervalInputs inputs_;
  std::vector<GasCarburizing::State> states_;
  std::vector<GasCarburizing::Workspace> workspaces_;
  double at_s_ = 0;
  bool failed_ = false;
};

}  // namespace hearthfront::solver
