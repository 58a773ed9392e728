// A plan that the program found for the rest of a load, confirmed on members drawn afresh, and in words.
#pragma once

#include <memory>
#include <string>
#include <vector>

#include "server/live/load_outlook.h"
#include "solver/outlook/search.h"

namespace hearthfront::server {

struct Proposal {
  bool found = false;
  std::string sentence;              // what `rest` does and what it brings, also where that is not enough
  std::string reason;                // why nothing reaches the asked chance; empty where found
  std::vector<std::string> changes;  // "boost: 40 min longer", ...
  std::vector<Segment> rest;         // the best there is; whole minutes
  std::shared_ptr<const LoadOutlook> present, outlook;  // along the present plan, and along `rest`
  double minutes_more = 0;
  double confirmed_joint_chance = 0;  // on solver::confirming_members others
};

struct ProposalAsk {
  double asked_chance = 0.9;
  solver::StandingLimits limits;
};
// Throws Problem where nothing can be projected (a model fails).
Proposal propose(const OutlookBase& base, const ProposalAsk& ask);

// What differs between two rests of a recipe, for people; equal ones give nothing.
std::vector<std::string> changes_between(const std::vector<Segment>& present,
                                         const std::vector<Segment>& wanted);

}  // namespace hearthfront::server
