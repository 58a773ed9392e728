#include "solver/outlook/outlook.h"

#include <algorithm>
#include <cmath>
#include <stdexcept>

#include "solver/outlook/walk.h"

namespace hearthfront::solver {
Outlook project(const std::vector<OutlookItem>& items, const std::vector<PlannedSegment>& plan,
                const FurnaceResponse& furnace, const IntervalInputs& now, const OutlookOptions& options) {
  if (items.empty() || plan.empty())
    throw std::invalid_argument("an outlook needs an item and a planned segment");
  Walk walk(items, plan, furnace, now, options.longest_step_s);
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
    while (elapsed_s < longest_s && !(planned.until && walk.due(segment))) {
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
