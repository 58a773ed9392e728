// Figures read off each lane of a field without allocating. Private to solver/outlook.
#pragma once

#include <vector>

#include "solver/outlook/outlook.h"

namespace hearthfront::solver {

// Depth at which one lane's carbon falls to `limit`, read from the core outward; 0 where it is nowhere above,
// the whole section where the core is above.
double depth_at_carbon_of_lane_m(const CarbonField& field, std::size_t lane, double limit_wt_pct);

// Finished case depth of one lane at its own criterion.
double case_depth_of_lane_m(const OutlookItem& item, std::size_t lane);
// Of all members (lanes from 1 on), into vectors of that length.
void read_members(const OutlookItem& item, std::vector<double>& case_depths_m,
                  std::vector<double>& surface_carbon_wt_pct);
// How fast the nominal lane's carbon falls at a depth; 0 where it does not.
double nominal_gradient_wt_pct_per_m(const CarbonField& field, double depth_m);

// What read_moment calls joint_chance, and no more: for searches.
double joint_chance_of(const std::vector<OutlookItem>& items);

}  // namespace hearthfront::solver
