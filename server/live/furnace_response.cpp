#include "server/live/furnace_response.h"

#include <algorithm>
#include <cmath>

namespace hearthfront::server {
namespace {

// Common practice, no source.
constexpr double looked_back_min = 90, mean_of_min = 30, followed_after_min = 25, trend_over_min = 12;
constexpr double heating_k_per_min = 0.3, near_set_k = 5;
constexpr double steady_k = 8, steady_wt_pct = 0.06;
constexpr std::size_t least_points = 8;

double minutes(std::int64_t span_us) {
  return static_cast<double>(span_us) / 60e6;
}

// The newest first; `visit` returns whether to go on.
template <typename Visit>
void each_point_back(const LiveLoad& load, Visit visit) {
  for (const auto* points : {&load.provisional_points(), &load.settled_points()})
    for (auto point = points->rbegin(); point != points->rend(); ++point)
      if (!visit(*point)) return;
}

bool measured(const RunPoint& point) {
  return point.input.gas && point.input.temperature_basis == Basis::measured &&
         point.input.carbon_potential_basis == Basis::measured;
}

// Whether a run before asked for the same: then there was nothing to follow.
bool same(const SetPoints& set, const SegmentRun& before, const LoadDefinition& def) {
  const Segment& segment = def.recipe_of(before.plan).segments[before.index];
  return std::fabs(set.temperature_degc - segment.temperature_degc) < 2 &&
         std::fabs(set.carbon_potential_wt_pct - segment.carbon_potential_wt_pct) < 0.015;
}

struct Trend {
  double first = 0, last = 0, first_at_min = 0, last_at_min = 0;
  int points = 0;
  double per_min() const {
    return points < 3 || first_at_min - last_at_min < 3 ? 0 : (last - first) / (first_at_min - last_at_min);
  }
};

}  // namespace

solver::FurnaceResponse furnace_response(const LiveLoad& load) {
  const LoadDefinition& def = load.definition();
  const RecipePlace& place = load.recipe_place();
  const std::int64_t now_us = load.state_us();
  const Segment& present = def.recipe_of(place.now().plan).segments[place.now().index];
  solver::FurnaceResponse response;
  response.temperature_degc = present.temperature_degc;
  response.carbon_potential_wt_pct = present.carbon_potential_wt_pct;

  bool newest = true;
  double sum_k = 0, sum_wt_pct = 0;
  std::size_t points = 0;
  Trend trend;
  auto run = place.runs().rbegin();
  each_point_back(load, [&](const RunPoint& point) {
    const double age_min = minutes(now_us - point.to_us);
    if (age_min > looked_back_min) return false;
    if (newest) {
      // Also what is held or planned: it is what the model takes for the furnace.
      response.temperature_degc = point.input.furnace_temperature_degc;
      response.carbon_potential_wt_pct = point.input.carbon_potential_wt_pct;
      newest = false;
    }
    if (!measured(point)) return true;
    if (age_min <= trend_over_min) {
      if (trend.points++ == 0) {
        trend.last = point.input.furnace_temperature_degc;
        trend.last_at_min = age_min;
      }
      trend.first = point.input.furnace_temperature_degc;
      trend.first_at_min = age_min;
    }
    while (std::next(run) != place.runs().rend() && run->from_us > point.from_us) ++run;
    const Recipe& recipe = def.recipe_of(run->plan);
    const double elapsed_min = minutes(point.from_us - run->from_us);
    const SetPoints set = set_points(recipe, run->index, elapsed_min);
    if (elapsed_min < recipe.segments[run->index].ramp_min) return true;
    if (elapsed_min < followed_after_min &&
        !(std::next(run) != place.runs().rend() && same(set, *std::next(run), def)))
      return true;
    // On its way from elsewhere it shows no offset yet.
    if (std::fabs(point.input.furnace_temperature_degc - response.temperature_degc) > steady_k ||
        std::fabs(point.input.carbon_potential_wt_pct - response.carbon_potential_wt_pct) > steady_wt_pct)
      return true;
    if (static_cast<double>(points) * def.lattice_s >= mean_of_min * 60) return false;
    sum_k += point.input.furnace_temperature_degc - set.temperature_degc;
    sum_wt_pct += point.input.carbon_potential_wt_pct - set.carbon_potential_wt_pct;
    ++points;
    return true;
  });

  const double rise_k_per_min = trend.per_min();
  const bool heating =
      rise_k_per_min > heating_k_per_min && response.temperature_degc < present.temperature_degc - near_set_k;
  if (heating) response.fastest_rise_k_per_s = std::clamp(rise_k_per_min, 0.3, 20.0) / 60.0;
  if (!heating && points >= least_points) {
    response.offset_k = sum_k / static_cast<double>(points);
    response.offset_carbon_potential_wt_pct = sum_wt_pct / static_cast<double>(points);
  }
  return response;
}

}  // namespace hearthfront::server
