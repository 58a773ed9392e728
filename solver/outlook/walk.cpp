#include "solver/outlook/walk.h"

#include <algorithm>
#include <cmath>

#include "solver/outlook/members.h"

namespace hearthfront::solver {
namespace {

constexpr double watchful_step_s = 120;  // while what ends a segment may happen at any moment
constexpr double trails_k = 10;          // a part so far behind its furnace is still changing quickly

}  // namespace

Walk::Walk(const std::vector<OutlookItem>& items, const std::vector<PlannedSegment>& plan,
           const FurnaceResponse& furnace, const IntervalInputs& now, double longest_step_s)
    : plan_(&plan), longest_step_s_(longest_step_s), items_(items), path_(plan, furnace), inputs_(now) {
  inputs_.load_temperature_degc.reset();
  for (const OutlookItem& item : items) {
    states_.push_back(*item.state);
    workspaces_.emplace_back(*item.model);
  }
  bind();
}

Walk::Walk(const Walk& other)
    : plan_(other.plan_),
      longest_step_s_(other.longest_step_s_),
      items_(other.items_),
      path_(other.path_),
      inputs_(other.inputs_),
      states_(other.states_),
      workspaces_(other.workspaces_),
      at_s_(other.at_s_),
      failed_(other.failed_) {
  bind();
}

void Walk::bind() {
  for (std::size_t i = 0; i < items_.size(); ++i) items_[i].state = &states_[i];
}

double Walk::step(std::size_t segment, double elapsed_s, double most_s) {
  double longest = longest_step_s_;
  const bool trails = std::any_of(states_.begin(), states_.end(), [&](const GasCarburizing::State& state) {
    return std::fabs(state.part_temperature_degc[0] - path_.shown_degc()) > trails_k;
  });
  if (trails || (*plan_)[segment].until) longest = std::min(longest, watchful_step_s);
  const double duration = std::min(most_s, path_.step_s(segment, elapsed_s, longest));
  const auto shown = path_.advance(segment, elapsed_s, duration);
  inputs_.duration_s = duration;
  inputs_.furnace_temperature_degc = shown.temperature_degc;
  inputs_.carbon_potential_wt_pct = shown.carbon_potential_wt_pct;
  for (std::size_t i = 0; i < items_.size(); ++i) {
    const Outcome outcome = items_[i].model->advance(states_[i], inputs_, workspaces_[i]);
    failed_ = failed_ || outcome.kind == OutcomeKind::failed;
  }
  at_s_ += duration;
  return duration;
}

void Walk::whole(std::size_t segment) {
  const PlannedSegment& planned = (*plan_)[segment];
  const double longest_s = planned.until ? planned.until->longest_s : planned.duration_s;
  double elapsed_s = 0;
  while (elapsed_s < longest_s && !failed_ && !(planned.until && due(segment)))
    elapsed_s += step(segment, elapsed_s, longest_s - elapsed_s);
}

void Walk::further(std::size_t segment, double elapsed_s, double duration_s) {
  double done_s = 0;
  while (done_s < duration_s && !failed_) done_s += step(segment, elapsed_s + done_s, duration_s - done_s);
}

bool Walk::due(std::size_t segment) const {
  const PlannedUntil& until = *(*plan_)[segment].until;
  switch (until.kind) {
    case PlannedUntil::Kind::case_depth_m:
      return case_depth_of_lane_m(items_[until.item], 0) + items_[until.item].grinding_stock_m >= until.limit;
    case PlannedUntil::Kind::surface_carbon_wt_pct:
      return states_[until.item].field.carbon_wt_pct(0, 0) >= until.limit;
    case PlannedUntil::Kind::part_temperature_within_k:
      return std::all_of(states_.begin(), states_.end(), [&](const GasCarburizing::State& state) {
        return state.part_temperature_degc[0] >= (*plan_)[segment].temperature_degc - until.limit;
      });
  }
  return false;
}

}  // namespace hearthfront::solver
