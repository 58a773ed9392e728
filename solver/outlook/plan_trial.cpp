#include "solver/outlook/plan_trial.h"

#include <algorithm>
#include <cmath>

namespace hearthfront::solver {
namespace {

constexpr double minute_s = 60, longest_step_s = 900;
// Chances below this say nothing yet; the distance from the windows guides.
constexpr double telling_chance = 1e-3;

double planned_s(const std::vector<PlannedSegment>& plan, std::size_t from) {
  double sum = 0;
  for (std::size_t i = from; i < plan.size(); ++i) sum += plan[i].duration_s;
  return sum;
}

}  // namespace

bool PlanScore::better_than(const PlanScore& other) const {
  if (reaches != other.reaches) return reaches;
  if (reaches) {
    if (std::fabs(duration_s - other.duration_s) > 1) return duration_s < other.duration_s;
    return chance > other.chance + 1e-6;
  }
  if (std::max(chance, other.chance) > telling_chance) return chance > other.chance + 1e-6;
  return distance < other.distance - 1e-6;
}

PlanTrials::PlanTrials(const std::vector<OutlookItem>& items, const std::vector<SegmentFreedom>& freedom,
                       const FurnaceResponse& furnace, const IntervalInputs& now, double longest_s)
    : items_(items), furnace_(furnace), now_(now), longest_s_(longest_s), free_length_(freedom.size()) {
  for (const OutlookItem& item : items) {
    models_.push_back(item.model->lane_alone(0));
    states_.push_back(item.model->lane_alone(*item.state, 0));
    no_offset_.push_back({0.0});
  }
  for (std::size_t i = 0; i < items.size(); ++i) {
    items_[i].model = &models_[i];
    items_[i].state = &states_[i];
    items_[i].criterion_offset_wt_pct = &no_offset_[i];
  }
  for (std::size_t i = 0; i < freedom.size(); ++i)
    if (freedom[i].duration) {
      free_length_ = i;
      shortest_s_ = freedom[i].shortest_s;
    }
}

void PlanTrials::set_goal(const MemberSpread& spread, double chance) {
  spread_ = &spread;
  goal_ = chance;
}

PlanScore PlanTrials::score_at_end(const Walk& walk, const std::vector<PlannedSegment>& plan,
                                   std::size_t from) const {
  const auto score = [&](const Walk& at_end) {
    const MemberSpread::Chance chance = spread_->chance(at_end.items());
    return PlanScore{chance.joint >= goal_ && !at_end.failed(), at_end.at_s(), chance.joint, chance.distance};
  };
  if (from == plan.size()) return score(walk);
  Walk rest(walk);
  for (std::size_t i = from; i < plan.size(); ++i) rest.whole(i);
  return score(rest);
}

// The goal is not reached at `low_s`, where `before` stands, but at `high_s`: the first whole minute at which
// it is.
PlanTrials::Found PlanTrials::first_reaching(const Walk& before, const std::vector<PlannedSegment>& plan,
                                             double low_s, double high_s) const {
  Found found;
  double low = std::floor(low_s / minute_s), high = std::ceil(high_s / minute_s);
  const auto at = [&](double length_min) {
    Walk walk(before);
    walk.further(free_length_, low_s, length_min * minute_s - low_s);
    return score_at_end(walk, plan, free_length_ + 1);
  };
  found.length_s = high * minute_s;
  found.score = at(high);
  while (high - low > 1.5) {
    const double middle = std::floor(0.5 * (low + high));
    const PlanScore score = at(middle);
    if (score.reaches) {
      found = {middle * minute_s, score};
      high = middle;
    } else {
      low = middle;
    }
  }
  return found;
}

PlanTrials::Found PlanTrials::along(Walk& walk, const std::vector<PlannedSegment>& plan,
                                    double most_s) const {
  const double look_each_s = std::clamp((most_s - shortest_s_) / 24, 300.0, 1800.0);
  walk.further(free_length_, 0, shortest_s_);
  Found best{shortest_s_, score_at_end(walk, plan, free_length_ + 1)};
  if (best.score.reaches) return best;
  int worse_in_a_row = 0;
  for (double length_s = shortest_s_; length_s < most_s - 1;) {
    const Walk before(walk);
    const double next_s = std::min(look_each_s, most_s - length_s);
    walk.further(free_length_, length_s, next_s);
    const PlanScore score = score_at_end(walk, plan, free_length_ + 1);
    if (score.reaches) return first_reaching(before, plan, length_s, length_s + next_s);
    length_s += next_s;
    if (score.better_than(best.score)) {
      best = {length_s, score};
      worse_in_a_row = 0;
    } else if (++worse_in_a_row == 4) {
      break;  // beyond the top
    }
  }
  return best;
}

PlanScore PlanTrials::try_plan(std::vector<PlannedSegment>& plan, double give_up_s) {
  ++tried_;
  Walk walk(items_, plan, furnace_, now_, longest_step_s);
  for (std::size_t i = 0; i < std::min(free_length_, plan.size()); ++i) walk.whole(i);
  if (free_length_ == plan.size()) return score_at_end(walk, plan, plan.size());
  const double tail_s = planned_s(plan, free_length_ + 1);
  const double most_s = std::min(longest_s_, give_up_s) - walk.at_s() - tail_s;
  if (most_s < shortest_s_) return {false, walk.at_s(), -1, 1e9};
  const Found found = along(walk, plan, std::max(most_s, minute_s));
  plan[free_length_].duration_s = found.length_s;
  return found.score;
}

}  // namespace hearthfront::solver
