// How the members of each item stand beside its nominal part at the end of some plan, and what chance that
// means for another end of the nominal parts. Private to solver/outlook.
#pragma once

#include <vector>

#include "solver/outlook/outlook.h"

namespace hearthfront::solver {

class MemberSpread {
 public:
  // Items with all their lanes at the end of a plan.
  explicit MemberSpread(const std::vector<OutlookItem>& items);

  struct Chance {
    double joint = 0;
    // How far nominal values are outside their windows, in window widths, summed: a guide where no member is
    // inside.
    double distance = 0;
  };
  // `nominal`: the same items, lane 0 alone.
  Chance chance(const std::vector<OutlookItem>& nominal) const;

 private:
  struct Item {
    std::vector<double> depth_ratio, depth_beyond_m, surface_beyond_wt_pct;
    double nominal_depth_m = 0;
  };
  std::vector<Item> items_;
  mutable std::vector<double> joint_, depths_, surfaces_;
};

}  // namespace hearthfront::solver
