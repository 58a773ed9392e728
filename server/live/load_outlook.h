// What the outlook says of one load at one moment; part of its published view.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "server/live/load_definition.h"
#include "solver/outlook/outlook.h"

namespace hearthfront::server {

struct LoadOutlook {
  std::int64_t at_us = 0;     // the state it starts from
  std::int64_t ends_us = 0;   // when the plan ends
  std::int64_t best_us = 0;   // when ending would have the best chance
  std::vector<Segment> rest;  // the plan from at_us on; the first is what is left of the present segment
  solver::OutlookMoment now;
  solver::Outlook ahead;
  // Joint chance that the recipe offered at the load's start, before any reading.
  double offered_joint_chance = 0;
  // What the furnace shows beside its set points and what is carried on.
  double offset_k = 0, offset_carbon_potential_wt_pct = 0;
};

}  // namespace hearthfront::server
