// What the outlook says of one load at one moment; part of its published view.
#pragma once

#include <cstdint>
#include <memory>
#include <string>
#include <vector>

#include "server/live/live_load.h"
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

// Where trials start from: all that a projection needs, apart from the running load. Immutable and shared, so
// that a worker computes while the engine goes on.
struct OutlookBase {
  std::shared_ptr<const LoadDefinition> definition;
  std::shared_ptr<const MemberModels> members;
  MemberStates states;
  std::int64_t at_us = 0;
  std::vector<Segment> rest;
  bool first_cools = false;  // whether the present segment is colder than the one before it
  solver::FurnaceResponse furnace;
  solver::IntervalInputs now;                   // gas, furnace settings and doubt that go on
  std::vector<solver::IntervalInputs> history;  // from the start to at_us, merged: for members drawn afresh
};

// Colder than the one before by more than control does: such a segment lets the load cool before the quench.
bool cools(const Segment& before, const Segment& segment);

// The load must stand level with its members. Throws nothing; where there is no outlook the sentence says
// why.
struct OutlookStart {
  std::shared_ptr<const OutlookBase> base;
  std::string missing;
};
OutlookStart outlook_start(const LiveLoad& load, std::shared_ptr<const LoadDefinition> definition);

std::vector<solver::PlannedSegment> planned(const LoadDefinition& load, const std::vector<Segment>& rest);

// Along `rest` in place of the base's own; empty where a model failed.
std::shared_ptr<LoadOutlook> make_outlook(const OutlookBase& base, const std::vector<Segment>& rest,
                                          const solver::StandingLimits& limits);

struct LoadView;
// Puts the outlook of a load that stands level with its members, or why there is none, into its view.
void add_outlook(LoadView& view, const LiveLoad& load, double offered_joint_chance,
                 const solver::StandingLimits& limits);

// What the recipe offers before anything was read: chance of all windows.
double offered_joint_chance(const LoadDefinition& load, const MemberModels& members);

}  // namespace hearthfront::server
