// Looks for the rest of a recipe that saves a load: the least time that reaches the asked chance of all
// windows of all items, under the limits of soot, carbide and furnace.
//
// Method: each plan is run on the nominal parts alone; the members' part in the chance is taken from the last
// plan on which all of them were run (their depths as ratios, their surface carbon as differences), and that
// is repeated at each plan the search settles on, until both agree. For given other controls the last free
// length is found along one run; the others by polling along each control with halved steps (R. Hooke, T. A.
// Jeeves, J. ACM 8 (1961) 212).
#pragma once

#include <string>
#include <vector>

#include "solver/outlook/outlook.h"

namespace hearthfront::solver {

struct SegmentFreedom {
  bool duration = true, carbon_potential = true, temperature = false;
  double shortest_s = 0;
};

struct SearchLimits {
  double asked_chance = 0.9;  // 0.5-0.99
  double longest_s = 0;       // of the whole rest; 0: twice the plan and six hours more
  double lowest_carbon_potential_wt_pct = 0.5, highest_carbon_potential_wt_pct = 1.25;
  double lowest_temperature_degc = 850, highest_temperature_degc = 950;
  bool nearby = false;  // the plan given is nearly the one: look around it only
};

// The highest carbon potential that a segment may have at a furnace temperature: furnace, soot (activity
// 0.95, common practice) and carbide (98 % of what the items' steels hold); and which of them it is.
enum class Ceiling { furnace, soot, carbide };
struct PotentialCeiling {
  double carbon_potential_wt_pct = 0;
  Ceiling by = Ceiling::furnace;
};
PotentialCeiling potential_ceiling(const std::vector<OutlookItem>& items, double temperature_degc,
                                   const SearchLimits& limits);

enum class SearchEnd {
  found,
  window_passed,  // an item is already deeper than its window allows
  conflict,       // one item would be shallow when another is deep
  too_wide,       // the band is wider than the window: no plan is that certain
  ceiling,        // a carbon potential stands at its ceiling
  no_control      // nothing may be changed
};

struct FoundPlan {
  SearchEnd end = SearchEnd::no_control;
  std::vector<PlannedSegment> plan;  // the best that there is, also where none reaches the asked chance
  double joint_chance = 0;           // on the members it was given
  double duration_s = 0;
  std::size_t item = 0, other_item = 0;  // whom `end` is about
  PotentialCeiling ceiling;              // with SearchEnd::ceiling
  int plans_tried = 0;
};

// `freedom` has one entry for each segment of `plan`; a segment with `until` keeps what ends it. Durations
// come in whole minutes, potentials in 0.01 wt%, temperatures in whole kelvins. Arguments as in `project`;
// throws as it.
FoundPlan find_plan(const std::vector<OutlookItem>& items, const std::vector<PlannedSegment>& plan,
                    const std::vector<SegmentFreedom>& freedom, const FurnaceResponse& furnace,
                    const IntervalInputs& now, const SearchLimits& limits);

// The joint chance at the end of a plan and nothing else.
double end_joint_chance(const std::vector<OutlookItem>& items, const std::vector<PlannedSegment>& plan,
                        const FurnaceResponse& furnace, const IntervalInputs& now);

}  // namespace hearthfront::solver
