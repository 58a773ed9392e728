#include "solver/outlook/search.h"

#include <algorithm>
#include <cmath>
#include <stdexcept>

#include "solver/atmosphere/carbon_gas.h"
#include "solver/material/activity.h"
#include "solver/material/constants.h"
#include "solver/outlook/members.h"
#include "solver/outlook/plan_trial.h"

namespace hearthfront::solver {
namespace {

constexpr double full_step_s = 600;
constexpr double carbide_share = 0.98;
constexpr double agreement = 0.003;
constexpr int most_rounds = 6;

// One thing that may be changed, and the grid it is changed on.
struct Control {
  enum class Kind { duration, carbon_potential, temperature };
  Kind kind = Kind::duration;
  std::size_t segment = 0;
  double low = 0, grid = 1;
};

class Search {
 public:
  Search(const std::vector<OutlookItem>& items, const std::vector<PlannedSegment>& plan,
         const std::vector<SegmentFreedom>& freedom, const FurnaceResponse& furnace,
         const IntervalInputs& now, const SearchLimits& limits)
      : items_(items),
        planned_(plan),
        furnace_(furnace),
        now_(now),
        limits_(limits),
        trials_(items, freedom, furnace, now, longest_s(plan, limits)) {
    std::size_t last_free = freedom.size();
    for (std::size_t i = 0; i < freedom.size(); ++i)
      if (freedom[i].duration) last_free = i;
    for (std::size_t i = 0; i < freedom.size(); ++i) {
      if (freedom[i].duration && i != last_free)
        controls_.push_back({Control::Kind::duration, i, freedom[i].shortest_s, 60});
      if (freedom[i].carbon_potential)
        controls_.push_back(
            {Control::Kind::carbon_potential, i, limits.lowest_carbon_potential_wt_pct, 0.01});
      if (freedom[i].temperature)
        controls_.push_back({Control::Kind::temperature, i, limits.lowest_temperature_degc, 1});
    }
    any_freedom_ = last_free < freedom.size() || !controls_.empty();
  }

  FoundPlan run() {
    FoundPlan result;
    std::vector<PlannedSegment> best = planned_;
    for (std::size_t i = 0; i < best.size(); ++i) fit_under_ceiling(best, i);
    MemberSpread spread = spread_at_end(best, result.joint_chance);
    double goal = limits_.asked_chance;
    for (int round = 0; round < most_rounds && any_freedom_; ++round) {
      trials_.set_goal(spread, goal);
      const PlanScore score = settle(best, round == 0 && !limits_.nearby);
      spread = spread_at_end(best, result.joint_chance);
      const bool agree = std::fabs(score.chance - result.joint_chance) < agreement;
      if (agree && (!score.reaches || result.joint_chance >= limits_.asked_chance)) break;
      // What the nominal parts promised and all members did not keep is asked for beforehand.
      if (score.reaches && result.joint_chance < limits_.asked_chance)
        goal = std::min(0.999, goal + limits_.asked_chance - result.joint_chance + 0.0005);
    }
    result.plan = best;
    for (const PlannedSegment& segment : best) result.duration_s += segment.duration_s;
    result.plans_tried = trials_.tried();
    explain(result);
    return result;
  }

 private:
  static double longest_s(const std::vector<PlannedSegment>& plan, const SearchLimits& limits) {
    if (limits.longest_s > 0) return limits.longest_s;
    double sum = 0;
    for (const PlannedSegment& segment : plan) sum += segment.duration_s;
    return 2 * sum + 6 * 3600;
  }

  // A furnace that runs below its set point holds less carbon without carbides or soot.
  PotentialCeiling ceiling_in(const PlannedSegment& segment) const {
    return potential_ceiling(items_, segment.temperature_degc + std::min(0.0, furnace_.offset_k), limits_);
  }

  // Of one control, as long as the segment's other values stand.
  double high(const Control& control, const PlannedSegment& segment) const {
    switch (control.kind) {
      case Control::Kind::duration:
        return 1e7;
      case Control::Kind::carbon_potential:
        return ceiling_in(segment).carbon_potential_wt_pct;
      case Control::Kind::temperature:
        return limits_.highest_temperature_degc;
    }
    return 0;
  }

  static double& value(const Control& control, PlannedSegment& segment) {
    switch (control.kind) {
      case Control::Kind::duration:
        return segment.duration_s;
      case Control::Kind::carbon_potential:
        return segment.carbon_potential_wt_pct;
      case Control::Kind::temperature:
        break;
    }
    return segment.temperature_degc;
  }

  bool potential_is_free(std::size_t segment) const {
    return std::any_of(controls_.begin(), controls_.end(), [&](const Control& control) {
      return control.segment == segment && control.kind == Control::Kind::carbon_potential;
    });
  }

  void fit_under_ceiling(std::vector<PlannedSegment>& plan, std::size_t i) const {
    if (!potential_is_free(i)) return;
    const double ceiling = ceiling_in(plan[i]).carbon_potential_wt_pct;
    if (plan[i].carbon_potential_wt_pct > ceiling)
      plan[i].carbon_potential_wt_pct = std::floor(ceiling * 100 + 1e-9) / 100;
  }

  // Returns false where the control already stands at its end.
  bool move(std::vector<PlannedSegment>& plan, const Control& control, double by) const {
    PlannedSegment& segment = plan[control.segment];
    double& at = value(control, segment);
    const double before = at;
    const double wanted = std::clamp(at + by, control.low, std::max(control.low, high(control, segment)));
    at = by > 0 ? std::floor(wanted / control.grid + 1e-6) * control.grid
                : std::ceil(wanted / control.grid - 1e-6) * control.grid;
    if (control.kind == Control::Kind::temperature) fit_under_ceiling(plan, control.segment);
    return std::fabs(at - before) > 1e-9;
  }

  double first_step(const Control& control, const PlannedSegment& segment) const {
    switch (control.kind) {
      case Control::Kind::duration:
        return std::max(16 * 60.0, std::exp2(std::round(std::log2(segment.duration_s / 240))) * 60);
      case Control::Kind::carbon_potential:
        return 0.08;
      case Control::Kind::temperature:
        break;
    }
    return 16;
  }

  bool take_if_better(std::vector<PlannedSegment> candidate, std::vector<PlannedSegment>& best,
                      PlanScore& score) {
    const PlanScore found = trials_.try_plan(candidate, score.reaches ? score.duration_s + 1 : 1e9);
    if (!found.better_than(score)) return false;
    best = std::move(candidate);
    score = found;
    return true;
  }

  bool poll(std::vector<PlannedSegment>& best, PlanScore& score, const std::vector<double>& steps) {
    bool improved = false;
    for (std::size_t c = 0; c < controls_.size(); ++c)
      for (const double sign : {-1.0, 1.0}) {
        auto candidate = best;
        if (move(candidate, controls_[c], sign * steps[c]) && take_if_better(candidate, best, score)) {
          improved = true;
          break;
        }
      }
    if (improved) return true;
    // Along a ridge neither control alone is better.
    for (std::size_t a = 0; a < controls_.size(); ++a)
      for (std::size_t b = a + 1; b < controls_.size(); ++b)
        for (const double sign : {-1.0, 1.0}) {
          auto candidate = best;
          const bool moved = move(candidate, controls_[a], sign * steps[a]);
          if (move(candidate, controls_[b], -sign * steps[b]) && moved &&
              take_if_better(candidate, best, score))
            return true;
        }
    return false;
  }

  // The best plan for the present goal, from `best` on and in the first round also from the richest gas.
  PlanScore settle(std::vector<PlannedSegment>& best, bool from_afar) {
    PlanScore score = trials_.try_plan(best, 1e9);
    if (from_afar && !controls_.empty()) {
      auto rich = best;
      for (const Control& control : controls_)
        if (control.kind == Control::Kind::carbon_potential) {
          move(rich, control, 1.0);
          break;
        }
      take_if_better(std::move(rich), best, score);
    }
    std::vector<double> steps, grids;
    for (const Control& control : controls_) {
      steps.push_back(from_afar ? first_step(control, best[control.segment]) : 4 * control.grid);
      grids.push_back(control.grid);
    }
    for (bool finest = false; !controls_.empty();) {
      while (poll(best, score, steps)) {
      }
      if (finest) break;
      finest = true;
      for (std::size_t c = 0; c < steps.size(); ++c) {
        steps[c] = std::max(grids[c], 0.5 * steps[c]);
        finest = finest && steps[c] <= grids[c] * 1.5;
      }
    }
    return score;
  }

  MemberSpread spread_at_end(const std::vector<PlannedSegment>& plan, double& joint_chance) const {
    Walk walk(items_, plan, furnace_, now_, full_step_s);
    for (std::size_t i = 0; i < plan.size(); ++i) walk.whole(i);
    joint_chance = walk.failed() ? 0 : joint_chance_of(walk.items());
    return MemberSpread(walk.items());
  }

  // Why nothing reaches the asked chance.
  void explain(FoundPlan& result) const {
    if (!any_freedom_) return;
    if (result.joint_chance >= limits_.asked_chance - 1e-9) {
      result.end = SearchEnd::found;
      return;
    }
    const OutlookMoment now = read_moment(items_, {});
    for (std::size_t i = 0; i < items_.size(); ++i)
      if (now.items[i].case_depth.above > 1 - limits_.asked_chance) {
        result.end = SearchEnd::window_passed;
        result.item = i;
        return;
      }
    Walk walk(items_, result.plan, furnace_, now_, full_step_s);
    for (std::size_t i = 0; i < result.plan.size(); ++i) walk.whole(i);
    const OutlookMoment end = read_moment(walk.items(), {});
    constexpr double telling = 0.1;
    result.item = end.controlling_item;
    std::size_t shallow = 0, deep = 0;
    for (std::size_t i = 0; i < items_.size(); ++i) {
      if (end.items[i].case_depth.below > end.items[shallow].case_depth.below) shallow = i;
      if (end.items[i].case_depth.above > end.items[deep].case_depth.above) deep = i;
    }
    if (shallow != deep && end.items[shallow].case_depth.below > telling &&
        end.items[deep].case_depth.above > telling) {
      result.end = SearchEnd::conflict;
      result.item = shallow;
      result.other_item = deep;
      return;
    }
    result.end = SearchEnd::too_wide;
    for (const Control& control : controls_) {
      if (control.kind != Control::Kind::carbon_potential) continue;
      const PlannedSegment& segment = result.plan[control.segment];
      const PotentialCeiling ceiling = ceiling_in(segment);
      const ItemOutlook& item = end.items[result.item];
      const bool poor = item.surface_carbon.below > telling && item.surface_carbon.above < telling;
      if (segment.carbon_potential_wt_pct < ceiling.carbon_potential_wt_pct - 0.011 || !poor) continue;
      result.end = SearchEnd::ceiling;
      result.ceiling = ceiling;
    }
  }

  const std::vector<OutlookItem>& items_;
  const std::vector<PlannedSegment>& planned_;
  const FurnaceResponse& furnace_;
  const IntervalInputs& now_;
  const SearchLimits& limits_;
  PlanTrials trials_;
  std::vector<Control> controls_;
  bool any_freedom_ = false;
};

}  // namespace

PotentialCeiling potential_ceiling(const std::vector<OutlookItem>& items, double temperature_degc,
                                   const SearchLimits& limits) {
  const double t_k = temperature_degc + zero_celsius_k;
  PotentialCeiling ceiling{limits.highest_carbon_potential_wt_pct, Ceiling::furnace};
  const auto lower = [&](double limit, Ceiling by) {
    if (limit < ceiling.carbon_potential_wt_pct) ceiling = {limit, by};
  };
  lower(carbon_at_activity(highest_working_activity, t_k), Ceiling::soot);
  for (const OutlookItem& item : items)
    lower(carbide_share * cementite_limit_wt_pct(t_k) * item.model->alloy_factor(), Ceiling::carbide);
  return ceiling;
}

FoundPlan find_plan(const std::vector<OutlookItem>& items, const std::vector<PlannedSegment>& plan,
                    const std::vector<SegmentFreedom>& freedom, const FurnaceResponse& furnace,
                    const IntervalInputs& now, const SearchLimits& limits) {
  if (items.empty() || plan.empty() || freedom.size() != plan.size())
    throw std::invalid_argument("a search needs items, a plan, and the freedom of each of its segments");
  return Search(items, plan, freedom, furnace, now, limits).run();
}

double end_joint_chance(const std::vector<OutlookItem>& items, const std::vector<PlannedSegment>& plan,
                        const FurnaceResponse& furnace, const IntervalInputs& now) {
  Walk walk(items, plan, furnace, now, full_step_s);
  for (std::size_t i = 0; i < plan.size(); ++i) walk.whole(i);
  return walk.failed() ? 0 : joint_chance_of(walk.items());
}

}  // namespace hearthfront::solver
