#include "solver/outlook/furnace_path.h"

#include <algorithm>
#include <cmath>

namespace hearthfront::solver {
namespace {

// Follows `target` as a first-order lag; returns the mean over the step and leaves the end in `value`.
double follow(double& value, double target, double lag_s, double duration_s, double fastest_rise_per_s) {
  const double start = value;
  const double share = -std::expm1(-duration_s / lag_s);
  const double end = start + (target - start) * share;
  const double reachable = start + fastest_rise_per_s * duration_s;
  if (end <= reachable) {
    value = end;
    return target + (start - target) * share * lag_s / duration_s;
  }
  value = reachable;
  return 0.5 * (start + reachable);
}

// Beyond these a furnace is still on its way, and steps stay short.
constexpr double on_its_way_k = 3.0, on_its_way_wt_pct = 0.02;
constexpr double short_step_s = 120.0;
constexpr double no_bound = 1e9;

}  // namespace

FurnacePath::FurnacePath(const std::vector<PlannedSegment>& plan, const FurnaceResponse& furnace)
    : plan_(plan),
      furnace_(furnace),
      followed_degc_(furnace.temperature_degc - furnace.offset_k),
      followed_wt_pct_(furnace.carbon_potential_wt_pct - furnace.offset_carbon_potential_wt_pct) {}

FurnacePath::Shown FurnacePath::set_points(std::size_t segment, double elapsed_s) const {
  const PlannedSegment& now = plan_[segment];
  if (elapsed_s >= now.ramp_s || now.ramp_s <= 0) return {now.temperature_degc, now.carbon_potential_wt_pct};
  // The first segment's ramp is under way: it goes on from where the furnace is.
  const double from_degc = segment > 0 ? plan_[segment - 1].temperature_degc : followed_degc_;
  const double from_wt_pct = segment > 0 ? plan_[segment - 1].carbon_potential_wt_pct : followed_wt_pct_;
  const double share = segment > 0 ? elapsed_s / now.ramp_s
                                   : std::min(1.0, short_step_s / std::max(1.0, now.ramp_s - elapsed_s));
  return {from_degc + share * (now.temperature_degc - from_degc),
          from_wt_pct + share * (now.carbon_potential_wt_pct - from_wt_pct)};
}

double FurnacePath::step_s(std::size_t segment, double elapsed_s, double longest_s) const {
  const Shown set = set_points(segment, elapsed_s);
  const bool settled = elapsed_s >= plan_[segment].ramp_s &&
                       std::fabs(set.temperature_degc - followed_degc_) < on_its_way_k &&
                       std::fabs(set.carbon_potential_wt_pct - followed_wt_pct_) < on_its_way_wt_pct;
  return settled ? longest_s : std::min(longest_s, short_step_s);
}

FurnacePath::Shown FurnacePath::advance(std::size_t segment, double elapsed_s, double duration_s) {
  const Shown set = set_points(segment, elapsed_s + 0.5 * duration_s);
  const double decay = -std::expm1(-duration_s / furnace_.decay_s);
  const double mean_share = decay * furnace_.decay_s / duration_s;
  Shown shown;
  shown.temperature_degc = follow(followed_degc_, set.temperature_degc, furnace_.temperature_lag_s,
                                  duration_s, furnace_.fastest_rise_k_per_s) +
                           furnace_.offset_k * mean_share;
  shown.carbon_potential_wt_pct = follow(followed_wt_pct_, set.carbon_potential_wt_pct,
                                         furnace_.carbon_potential_lag_s, duration_s, no_bound) +
                                  furnace_.offset_carbon_potential_wt_pct * mean_share;
  shown.carbon_potential_wt_pct = std::max(0.0, shown.carbon_potential_wt_pct);
  furnace_.offset_k *= 1 - decay;
  furnace_.offset_carbon_potential_wt_pct *= 1 - decay;
  return shown;
}

}  // namespace hearthfront::solver
