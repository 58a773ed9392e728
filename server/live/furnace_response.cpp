#include "server/live/furnace_response.h"

#include <algorithm>
#include <cmath>

namespace hearthfront::server {
namespace {

// Common practice, no source.
constexpr double looked_back_min = 90, mean_of_min = 30, followed_after_min = 25, trend_over_min = 12;
constexpr double heating_k_per_min = 0.3, near_set_k = 5;
constexpr double steady_k = 8;
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

// Shown minus set over the newest minutes in which the furnace had had time to follow.
struct SteadyOffset {
  double sum = 0;
  std::size_t points = 0;
  void add(double shown, double set, double lattice_s) {
    if (static_cast<double>(points) * lattice_s >= mean_of_min * 60) return;
    sum += shown - set;
    ++points;
  }
  double mean() const { return points < least_points ? 0 : sum / static_cast<double>(points); }
};

// Whether the furnace had had time to follow a set point: it is that of the run before, or it stands for
// long.
bool had_time(double elapsed_min, double set, double set_before, double alike) {
  return elapsed_min >= followed_after_min || std::fabs(set - set_before) < alike;
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
  SteadyOffset temperature, carbon;
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
    if (elapsed_min < recipe.segments[run->index].ramp_min) return true;
    const SetPoints set = set_points(recipe, run->index, elapsed_min);
    // Before the first run there was nothing to follow from.
    SetPoints before{-1e9, -1e9};
    if (const auto earlier = std::next(run); earlier != place.runs().rend())
      before = end_points(def.recipe_of(earlier->plan).segments[earlier->index]);
    const double shown_degc = point.input.furnace_temperature_degc;
    // One that heated or cooled by more than control does was on its way.
    if (had_time(elapsed_min, set.temperature_degc, before.temperature_degc, 2) &&
        std::fabs(shown_degc - response.temperature_degc) <= steady_k)
      temperature.add(shown_degc, set.temperature_degc, def.lattice_s);
    if (had_time(elapsed_min, set.carbon_potential_wt_pct, before.carbon_potential_wt_pct, 0.015))
      carbon.add(point.input.carbon_potential_wt_pct, set.carbon_potential_wt_pct, def.lattice_s);
    return true;
  });

  const double rise_k_per_min = trend.per_min();
  const bool heating =
      rise_k_per_min > heating_k_per_min && response.temperature_degc < present.temperature_degc - near_set_k;
  if (heating) response.fastest_rise_k_per_s = std::clamp(rise_k_per_min, 0.3, 20.0) / 60.0;
  if (!heating) response.offset_k = temperature.mean();
  response.offset_carbon_potential_wt_pct = carbon.mean();
  return response;
}

}  // namespace hearthfront::server
