#include "server/live/load_outlook.h"

#include <algorithm>
#include <cmath>

#include "server/live/furnace_response.h"
#include "server/live/view.h"

namespace hearthfront::server {
namespace {

std::int64_t us(double seconds) {
  return std::llround(seconds * 1e6);
}

solver::PlannedUntil planned_until(const LoadDefinition& load, const Segment& segment) {
  solver::PlannedUntil until;
  until.longest_s = segment.longest_min * 60;
  until.limit = segment.until->limit;
  for (std::size_t i = 0; i < load.items.size(); ++i)
    if (load.items[i].name == segment.until->item) until.item = i;
  switch (segment.until->kind) {
    case Until::Kind::case_depth:
      until.kind = solver::PlannedUntil::Kind::case_depth_m;
      until.limit *= 1e-3;
      break;
    case Until::Kind::surface_carbon:
      until.kind = solver::PlannedUntil::Kind::surface_carbon_wt_pct;
      break;
    case Until::Kind::part_temperature:
      until.kind = solver::PlannedUntil::Kind::part_temperature_within_k;
      break;
  }
  return until;
}

// What is left of the recipe: of the present segment its rest, then the others whole.
std::vector<Segment> rest_of(const LiveLoad& load) {
  const RecipePlace& place = load.recipe_place();
  const Recipe& recipe = load.definition().recipe_of(place.now().plan);
  const double elapsed_min = place.elapsed_min(load.state_us());
  std::vector<Segment> rest(recipe.segments.begin() + static_cast<std::ptrdiff_t>(place.now().index),
                            recipe.segments.end());
  Segment& first = rest.front();
  first.duration_min = place.segment_left_min(recipe, load.state_us());
  first.ramp_min = std::clamp(first.ramp_min - elapsed_min, 0.0, first.duration_min);
  if (first.until) first.longest_min = std::max(first.duration_min, first.longest_min - elapsed_min);
  // A segment that is over, and that the furnace has only not left yet, is nobody's plan any more. One that
  // waits for its `until` is not over with its estimate.
  constexpr double over_min = 0.5;
  const bool waits = first.until && first.longest_min >= over_min;
  if (rest.size() > 1 && first.duration_min < over_min && !waits) rest.erase(rest.begin());
  return rest;
}

// History in stretches of up to ten minutes over which the inputs hardly change.
std::vector<solver::IntervalInputs> merged_history(const LiveLoad& load) {
  constexpr double longest_s = 600, same_k = 4, same_wt_pct = 0.03;
  std::vector<solver::IntervalInputs> merged;
  GapClock gaps;
  const solver::IntervalInputs* first = nullptr;
  solver::IntervalInputs first_kept;
  load.each_point([&](const RunPoint& point) {
    const solver::IntervalInputs next = gaps.take(point);
    const auto near = [](double a, double b, double limit) { return std::fabs(a - b) <= limit; };
    const bool same =
        first && first->gas == next.gas &&
        first->load_temperature_degc.has_value() == next.load_temperature_degc.has_value() &&
        first->co_fraction.has_value() == next.co_fraction.has_value() &&
        first->h2_fraction.has_value() == next.h2_fraction.has_value() &&
        near(first->furnace_temperature_degc, next.furnace_temperature_degc, same_k) &&
        near(first->load_temperature_degc.value_or(0), next.load_temperature_degc.value_or(0), same_k) &&
        near(first->carbon_potential_wt_pct, next.carbon_potential_wt_pct, same_wt_pct) &&
        merged.back().duration_s + next.duration_s <= longest_s;
    if (!same) {
      merged.push_back(next);
      first_kept = next;
      first = &first_kept;
      return;
    }
    solver::IntervalInputs& sum = merged.back();
    const double share = next.duration_s / (sum.duration_s + next.duration_s);
    const auto mix = [&](double& into, double value) { into += share * (value - into); };
    mix(sum.furnace_temperature_degc, next.furnace_temperature_degc);
    mix(sum.carbon_potential_wt_pct, next.carbon_potential_wt_pct);
    if (sum.load_temperature_degc) mix(*sum.load_temperature_degc, *next.load_temperature_degc);
    if (sum.co_fraction) mix(*sum.co_fraction, *next.co_fraction);
    if (sum.h2_fraction) mix(*sum.h2_fraction, *next.h2_fraction);
    mix(sum.doubt.carbon_potential_per_k, next.doubt.carbon_potential_per_k);
    mix(sum.doubt.carbon_source_sd_wt_pct, next.doubt.carbon_source_sd_wt_pct);
    mix(sum.doubt.temperature_gap_sd_k, next.doubt.temperature_gap_sd_k);
    mix(sum.doubt.carbon_potential_gap_sd_wt_pct, next.doubt.carbon_potential_gap_sd_wt_pct);
    sum.furnace = next.furnace;
    sum.duration_s += next.duration_s;
  });
  return merged;
}

}  // namespace

bool cools(const Segment& before, const Segment& segment) {
  constexpr double cools_by_k = 15;
  return segment.temperature_degc < before.temperature_degc - cools_by_k;
}

std::vector<solver::PlannedSegment> planned(const LoadDefinition& load, const std::vector<Segment>& rest) {
  std::vector<solver::PlannedSegment> plan;
  for (const Segment& segment : rest) {
    plan.push_back({segment.duration_min * 60, segment.temperature_degc, segment.carbon_potential_wt_pct,
                    segment.ramp_min * 60, std::nullopt});
    if (segment.until) plan.back().until = planned_until(load, segment);
  }
  return plan;
}

OutlookStart outlook_start(const LiveLoad& load, std::shared_ptr<const LoadDefinition> definition) {
  if (load.at_end()) return {nullptr, "The load has ended."};
  if (load.definition().place_at(load.state_us()).outside())
    return {nullptr, "Outside any furnace: nothing is known of where it goes next."};
  for (std::size_t i = 0; i < load.item_count(); ++i)
    if (load.state(i).failed) return {nullptr, "The model failed on this load."};
  const LoadEnsemble* members = load.members();
  if (!members) return {nullptr, "Bands are still being worked out after a start or a change."};
  auto base = std::make_shared<OutlookBase>();
  base->members = members->members();
  base->states = members->now();
  base->at_us = load.state_us();
  base->rest = rest_of(load);
  const SegmentRun& run = load.recipe_place().now();
  const auto& segments = load.definition().recipe_of(run.plan).segments;
  base->first_cools = run.index > 0 && cools(segments[run.index - 1], segments[run.index]);
  base->furnace = furnace_response(load);
  const RunPoint* last = nullptr;
  load.each_point([&](const RunPoint& point) { last = &point; });
  if (last) {
    // The gap that is open now stays open; what comes after it is in the future's doubt.
    GapClock gaps = members->gaps();
    base->now = gaps.take(*last);
  }
  const Furnace& furnace = *load.definition().furnace(load.definition().place_at(load.state_us()).furnace);
  if (!base->now.furnace)
    base->now.furnace =
        solver::FurnaceSettings{furnace.beta_m_per_s, furnace.co_fraction, furnace.h2_fraction};
  base->now.gas = true;
  const solver::Priors priors = priors_of(load.definition());
  base->now.doubt.future_temperature_sd_k = priors.future_temperature_sd_k;
  base->now.doubt.future_carbon_potential_sd_wt_pct = priors.future_carbon_potential_sd_wt_pct;
  base->history = merged_history(load);
  base->definition = std::move(definition);
  return {base, ""};
}

std::shared_ptr<LoadOutlook> make_outlook(const OutlookBase& base, const std::vector<Segment>& rest,
                                          const solver::StandingLimits& limits) {
  const auto items = outlook_items(*base.definition, *base.members, base.states);
  double rest_s = 0;
  for (const Segment& segment : rest) rest_s += segment.duration_min * 60;
  solver::OutlookOptions options;
  options.limits = limits;
  options.course_step_s = std::max(900.0, rest_s / 12);
  options.beyond_s = std::max(2 * 3600.0, 0.25 * rest_s);
  auto outlook = std::make_shared<LoadOutlook>();
  outlook->ahead = solver::project(items, planned(*base.definition, rest), base.furnace, base.now, options);
  if (outlook->ahead.failed) return nullptr;
  outlook->at_us = base.at_us;
  outlook->ends_us = base.at_us + us(outlook->ahead.end.at_s);
  outlook->best_us = base.at_us + us(outlook->ahead.best_at_s);
  outlook->rest = rest;
  // To people the length of a segment that waits is what is projected, not what the recipe once guessed.
  double before_s = 0;
  for (std::size_t i = 0; i < outlook->rest.size(); ++i) {
    Segment& segment = outlook->rest[i];
    if (segment.until) segment.duration_min = (outlook->ahead.segment_ends_s[i] - before_s) / 60;
    if (segment.until) segment.ramp_min = std::min(segment.ramp_min, segment.duration_min);
    before_s = outlook->ahead.segment_ends_s[i];
  }
  outlook->now = solver::read_moment(items, limits);
  outlook->offset_k = base.furnace.offset_k;
  outlook->offset_carbon_potential_wt_pct = base.furnace.offset_carbon_potential_wt_pct;
  return outlook;
}

void add_outlook(LoadView& view, const LiveLoad& load, double offered, const solver::StandingLimits& limits) {
  OutlookStart start = outlook_start(load, view.result.definition);
  view.outlook_missing = std::move(start.missing);
  if (!start.base) return;
  auto outlook = make_outlook(*start.base, start.base->rest, limits);
  if (!outlook) {
    view.outlook_missing = "The model failed on the way to the end of the cycle.";
    return;
  }
  outlook->offered_joint_chance = offered;
  view.outlook = std::move(outlook);
  view.outlook_base = std::move(start.base);
}

double offered_joint_chance(const LoadDefinition& load, const MemberModels& members) {
  const MemberStates states = start_members(load, members);
  const auto items = outlook_items(load, members, states);
  const Segment& first = load.recipe.segments.front();
  solver::FurnaceResponse furnace;
  furnace.temperature_degc = first.temperature_degc;
  furnace.carbon_potential_wt_pct = first.carbon_potential_wt_pct;
  solver::IntervalInputs now;
  const Furnace& settings = load.first_furnace();
  now.furnace = solver::FurnaceSettings{settings.beta_m_per_s, settings.co_fraction, settings.h2_fraction};
  now.doubt.carbon_source_sd_wt_pct = settings.carbon_potential_sd_wt_pct;
  const solver::Priors priors = priors_of(load);
  now.doubt.future_temperature_sd_k = priors.future_temperature_sd_k;
  now.doubt.future_carbon_potential_sd_wt_pct = priors.future_carbon_potential_sd_wt_pct;
  solver::OutlookOptions options;
  options.course_step_s = 1e9;
  options.beyond_s = 0;
  const solver::Outlook outlook =
      solver::project(items, planned(load, load.recipe.segments), furnace, now, options);
  return outlook.failed ? 0 : outlook.end.joint_chance;
}

}  // namespace hearthfront::server
