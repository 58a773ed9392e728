#include "server/live/recipe_place.h"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <limits>

namespace hearthfront::server {
namespace {

// How near a furnace reads to a set point it is controlled to, and how far apart two set points must be to
// be told apart; common practice, no source.
constexpr double near_k = 8, near_wt_pct = 0.06;
constexpr double apart_k = 12, apart_wt_pct = 0.1;
constexpr std::int64_t minute_us = 60'000'000;
constexpr std::int64_t sure_after_us = 4 * minute_us;
constexpr std::int64_t doubt_after_us = 15 * minute_us;
constexpr double heating_k_per_min = 0.3;

std::int64_t us(double minutes) {
  return std::llround(minutes * 60e6);
}
double minutes(std::int64_t span_us) {
  return static_cast<double>(span_us) / 60e6;
}

bool apart(const Segment& a, const Segment& b) {
  return std::fabs(a.temperature_degc - b.temperature_degc) > apart_k ||
         std::fabs(a.carbon_potential_wt_pct - b.carbon_potential_wt_pct) > apart_wt_pct;
}

bool reads_like(const FurnaceSight& sight, const SetPoints& set) {
  return std::fabs(*sight.temperature_degc - set.temperature_degc) <= near_k &&
         std::fabs(*sight.carbon_potential_wt_pct - set.carbon_potential_wt_pct) <= near_wt_pct;
}

void since(std::optional<std::int64_t>& mark, bool holds, std::int64_t from_us) {
  if (!holds)
    mark.reset();
  else if (!mark)
    mark = from_us;
}

}  // namespace

SetPoints end_points(const Segment& segment) {
  return {segment.temperature_degc, segment.carbon_potential_wt_pct};
}

SetPoints set_points(const Recipe& recipe, std::size_t index, double elapsed_min) {
  const Segment& segment = recipe.segments[index];
  const SetPoints end = end_points(segment);
  if (index == 0 || elapsed_min >= segment.ramp_min) return end;
  const SetPoints start = end_points(recipe.segments[index - 1]);
  const double share = elapsed_min / segment.ramp_min;
  return {
      start.temperature_degc + share * (end.temperature_degc - start.temperature_degc),
      start.carbon_potential_wt_pct + share * (end.carbon_potential_wt_pct - start.carbon_potential_wt_pct)};
}

const char* text(PlacedBy by) {
  switch (by) {
    case PlacedBy::start:
      return "start";
    case PlacedBy::readings:
      return "readings";
    case PlacedBy::recipe_time:
      return "recipe time";
    case PlacedBy::model:
      return "model";
    case PlacedBy::plan:
      return "plan";
  }
  return "";
}

std::int64_t RecipePlace::planned_end_us(const Recipe& recipe) const {
  const Segment& segment = recipe.segments[now().index];
  if (!segment.until) return now().from_us + us(segment.duration_min);
  const std::int64_t latest = now().from_us + us(segment.longest_min);
  return due_us_ ? std::min(*due_us_, latest) : latest;
}

void RecipePlace::follow(std::size_t plan, std::int64_t from_us) {
  enter(0, from_us, PlacedBy::plan);
  runs_.back().plan = plan;
}

void RecipePlace::enter(std::size_t index, std::int64_t from_us, PlacedBy by) {
  runs_.push_back({index, from_us, by, now().plan});
  been_here_ = false;
  due_us_.reset();
  left_us_.reset();
  next_us_.reset();
  nowhere_us_.reset();
}

void RecipePlace::step(const Recipe& recipe, const FurnaceSight& sight, bool due) {
  const bool seen = sight.temperature_degc && sight.carbon_potential_wt_pct;
  // Several short segments may end within one interval.
  for (bool moved = true; moved;) {
    moved = false;
    const std::size_t index = now().index;
    const Segment& segment = recipe.segments[index];
    if (segment.until && due && !due_us_) due_us_ = sight.to_us;
    const double elapsed = elapsed_min(sight.to_us);
    const bool here = seen && reads_like(sight, set_points(recipe, index, elapsed));
    const bool last = index + 1 == recipe.segments.size();
    const bool told_apart = !last && seen && apart(segment, recipe.segments[index + 1]);
    const bool there = told_apart && reads_like(sight, end_points(recipe.segments[index + 1]));
    been_here_ = been_here_ || here;
    since(left_us_, seen && !here, sight.from_us);
    // On its way to this segment's set points a gas may pass those of the next.
    const bool may_go_on = been_here_ || planned_end_us(recipe) <= sight.to_us;
    since(next_us_, may_go_on && there && !here, sight.from_us);
    const bool heating =
        seen && last_degc_ &&
        *sight.temperature_degc<segment.temperature_degc&& * sight.temperature_degc - *last_degc_>
                heating_k_per_min *
            minutes(sight.to_us - sight.from_us);
    since(nowhere_us_, seen && !here && !there && !heating, sight.from_us);
    if (last) break;
    if (next_us_ && sight.to_us - *next_us_ >= sure_after_us) {
      // It left for the next segment when it ceased to read like this one.
      enter(index + 1, std::max(now().from_us + 1, std::min(*next_us_, left_us_.value_or(*next_us_))),
            PlacedBy::readings);
    } else if (const std::int64_t end = planned_end_us(recipe);
               end <= sight.to_us && !(told_apart && here) && !next_us_) {
      const bool by_model = segment.until && due_us_;
      // A furnace that stayed longer goes on when it leaves.
      const std::int64_t from = told_apart && left_us_ ? std::max(end, *left_us_) : end;
      enter(index + 1, from, by_model ? PlacedBy::model : PlacedBy::recipe_time);
      due = false;
      moved = true;
    }
  }
  if (sight.temperature_degc) last_degc_ = sight.temperature_degc;
  last_ = sight;
}

SetPoints RecipePlace::planned_means(const Recipe& recipe, std::int64_t from_us, std::int64_t to_us) const {
  SetPoints sum;
  std::int64_t start = now().from_us;
  for (std::size_t i = now().index; i < recipe.segments.size(); ++i) {
    const bool last = i + 1 == recipe.segments.size();
    const Segment& segment = recipe.segments[i];
    const std::int64_t planned =
        i == now().index && segment.until ? planned_end_us(recipe) : start + us(segment.duration_min);
    const std::int64_t end = last ? std::numeric_limits<std::int64_t>::max() : std::max(planned, start);
    // The mean of straight pieces is the value at their middle; the ramp's end is the one kink inside.
    const std::int64_t kink = start + us(segment.ramp_min);
    for (const auto& [a, b] : {std::pair{start, std::min(kink, end)}, std::pair{std::min(kink, end), end}}) {
      const std::int64_t low = std::max(a, from_us), high = std::min(b, to_us);
      if (low >= high) continue;
      const double middle_min = minutes(low - start) + 0.5 * minutes(high - low);
      const SetPoints at = set_points(recipe, i, middle_min);
      const double share = static_cast<double>(high - low) / static_cast<double>(to_us - from_us);
      sum.temperature_degc += share * at.temperature_degc;
      sum.carbon_potential_wt_pct += share * at.carbon_potential_wt_pct;
    }
    start = end;
    if (last) break;
  }
  return sum;
}

double RecipePlace::elapsed_min(std::int64_t at_us) const {
  return minutes(at_us - now().from_us);
}

double RecipePlace::segment_left_min(const Recipe& recipe, std::int64_t at_us) const {
  const Segment& segment = recipe.segments[now().index];
  const std::int64_t end =
      segment.until && !due_us_ ? now().from_us + us(segment.duration_min) : planned_end_us(recipe);
  return std::max(0.0, minutes(end - at_us));
}

double RecipePlace::minutes_left(const Recipe& recipe, std::int64_t at_us) const {
  const bool last = now().index + 1 == recipe.segments.size();
  if (last) return minutes(now().from_us + us(recipe.segments.back().duration_min) - at_us);
  double sum = segment_left_min(recipe, at_us);
  for (std::size_t i = now().index + 1; i < recipe.segments.size(); ++i)
    sum += recipe.segments[i].duration_min;
  return sum;
}

double RecipePlace::long_by_min(const Recipe& recipe, std::int64_t at_us) const {
  const Segment& segment = recipe.segments[now().index];
  const double over = minutes(at_us - planned_end_us(recipe));
  return over > segment.tolerance_min ? over : 0.0;
}

std::string RecipePlace::doubt(const Recipe& recipe) const {
  if (!nowhere_us_ || last_.to_us - *nowhere_us_ < doubt_after_us) return "";
  const Segment& segment = recipe.segments[now().index];
  const SetPoints set = set_points(recipe, now().index, elapsed_min(last_.to_us));
  char line[256];
  std::snprintf(line, sizeof line,
                "Unsure where the recipe is: the furnace reads %.0f degC and %.2f %% C, segment \"%s\" asks "
                "%.0f degC and %.2f %% C.",
                *last_.temperature_degc, *last_.carbon_potential_wt_pct, segment.name.c_str(),
                set.temperature_degc, set.carbon_potential_wt_pct);
  std::string sentence = line;
  for (std::size_t i = 0; i < recipe.segments.size(); ++i)
    if (i != now().index && reads_like(last_, end_points(recipe.segments[i])))
      return sentence + " It reads like segment \"" + recipe.segments[i].name + "\".";
  return sentence;
}

}  // namespace hearthfront::server
