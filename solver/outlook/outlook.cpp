#include "solver/outlook/outlook.h"

#include <algorithm>
#include <cmath>
#include <stdexcept>

#include "solver/outlook/furnace_path.h"
#include "solver/outlook/members.h"

namespace hearthfront::solver {
namespace {

constexpr double watchful_step_s = 120;  // while what ends a segment may happen at any moment

// The items of a load on their way along a plan.
class Walk {
 public:
  Walk(const std::vector<OutlookItem>& items, const std::vector<PlannedSegment>& plan,
       const FurnaceResponse& furnace, const IntervalInputs& now, const OutlookOptions& options)
      : items_(items), plan_(plan), path_(plan, furnace), inputs_(now), options_(options) {
    inputs_.load_temperature_degc.reset();
    for (const OutlookItem& item : items) states_.push_back(*item.state);
    for (std::size_t i = 0; i < items.size(); ++i) {
      items_[i].state = &states_[i];
      workspaces_.emplace_back(*items[i].model);
    }
  }

  const std::vector<OutlookItem>& items() const { return items_; }
  double at_s() const { return at_s_; }
  bool failed() const { return failed_; }

  // `elapsed_s` into `segment`, at most `most_s` further.
  double step(std::size_t segment, double elapsed_s, double most_s) {
    double longest = options_.longest_step_s;
    if (plan_[segment].until) longest = std::min(longest, watchful_step_s);
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

  bool due(const PlannedSegment& segment) const {
    const PlannedUntil& until = *segment.until;
    switch (until.kind) {
      case PlannedUntil::Kind::case_depth_m:
        return case_depth_of_lane_m(items_[until.item], 0) + items_[until.item].grinding_stock_m >=
               until.limit;
      case PlannedUntil::Kind::surface_carbon_wt_pct:
        return states_[until.item].field.carbon_wt_pct(0, 0) >= until.limit;
      case PlannedUntil::Kind::part_temperature_within_k:
        return std::all_of(states_.begin(), states_.end(), [&](const GasCarburizing::State& state) {
          return state.part_temperature_degc[0] >= segment.temperature_degc - until.limit;
        });
    }
    return false;
  }

 private:
  std::vector<OutlookItem> items_;
  const std::vector<PlannedSegment>& plan_;
  FurnacePath path_;
  IntervalInputs inputs_;
  const OutlookOptions& options_;
  std::vector<GasCarburizing::State> states_;
  std::vector<GasCarburizing::Workspace> workspaces_;
  double at_s_ = 0;
  bool failed_ = false;
};

}  // namespace

Outlook project(const std::vector<OutlookItem>& items, const std::vector<PlannedSegment>& plan,
                const FurnaceResponse& furnace, const IntervalInputs& now, const OutlookOptions& options) {
  if (items.empty() || plan.empty())
    throw std::invalid_argument("an outlook needs an item and a planned segment");
  Walk walk(items, plan, furnace, now, options);
  Outlook outlook;
  double next_moment_s = options.course_step_s;
  const auto note = [&]() -> const OutlookMoment& {
    outlook.course.push_back(read_moment(walk.items(), options.limits));
    outlook.course.back().at_s = walk.at_s();
    next_moment_s = walk.at_s() + options.course_step_s;
    return outlook.course.back();
  };
  outlook.best_joint_chance = -1;
  const auto note_ending = [&] {
    const OutlookMoment& moment = note();
    // A later moment must be better by more than rounding: of equal ones the first counts.
    if (moment.joint_chance <= outlook.best_joint_chance + 1e-6) return;
    outlook.best_at_s = moment.at_s;
    outlook.best_joint_chance = moment.joint_chance;
  };

  if (plan.size() > 1 || plan.front().duration_s > 0 || plan.front().until) {
    if (plan.size() == 1)
      note_ending();
    else
      note();
  }
  for (std::size_t segment = 0; segment < plan.size(); ++segment) {
    const PlannedSegment& planned = plan[segment];
    const bool last = segment + 1 == plan.size();
    const double longest_s = planned.until ? planned.until->longest_s : planned.duration_s;
    double elapsed_s = 0;
    while (elapsed_s < longest_s && !(planned.until && walk.due(planned))) {
      const double to_moment_s = std::max(1.0, next_moment_s - walk.at_s());
      elapsed_s += walk.step(segment, elapsed_s, std::min(longest_s - elapsed_s, to_moment_s));
      if (walk.failed()) {
        outlook.failed = true;
        return outlook;
      }
      const bool more = elapsed_s < longest_s - 1;
      if (!more || walk.at_s() < next_moment_s - 0.5) continue;
      if (last)
        note_ending();
      else
        note();
    }
    outlook.segment_ends_s.push_back(walk.at_s());
  }
  note_ending();
  outlook.end = outlook.course.back();
  const std::size_t final_segment = plan.size() - 1;
  const double end_s = walk.at_s();
  const double beyond_step_s = std::max(options.course_step_s, options.beyond_s / 8);
  while (walk.at_s() < end_s + options.beyond_s - 1) {
    const double until_s = std::min(walk.at_s() + beyond_step_s, end_s + options.beyond_s);
    while (walk.at_s() < until_s - 0.5)
      walk.step(final_segment, plan.back().duration_s + walk.at_s() - end_s, until_s - walk.at_s());
    if (walk.failed()) break;
    note_ending();
  }
  return outlook;
}

}  // namespace hearthfront::solver
