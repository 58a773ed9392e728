// Where in its recipe a load is. The controller runs the recipe, not we: so the place is taken from what the
// furnace reads where that tells the segments apart, else from the recipe's own times, and it is said when
// neither fits. A pure function of the inputs along the lattice, so that live and replay agree.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "server/live/load_definition.h"

namespace hearthfront::server {

enum class PlacedBy : std::uint8_t { start, readings, recipe_time, model, plan };
const char* text(PlacedBy by);  // "start", "readings", "recipe time", "model", "plan"

struct SetPoints {
  double temperature_degc = 0, carbon_potential_wt_pct = 0;
};

// What one interval showed; empty where it was not measured.
struct FurnaceSight {
  std::int64_t from_us = 0, to_us = 0;
  std::optional<double> temperature_degc, carbon_potential_wt_pct;
};

struct SegmentRun {
  std::size_t index = 0;
  std::int64_t from_us = 0;
  PlacedBy by = PlacedBy::start;
  std::size_t plan = 0;  // which recipe `index` counts in: LoadDefinition::recipe_of
};

SetPoints end_points(const Segment& segment);  // after its ramp
// Set points of segment `index`, `elapsed_min` into it, its ramp included.
SetPoints set_points(const Recipe& recipe, std::size_t index, double elapsed_min);

class RecipePlace {
 public:
  explicit RecipePlace(std::int64_t started_us) : runs_{{0, started_us, PlacedBy::start}} {}

  // `due`: whether the model says that the present segment's `until` is reached at the interval's end.
  void step(const Recipe& recipe, const FurnaceSight& sight, bool due);

  // From here on `plan` is the recipe, from its first segment: the calls that follow are given that recipe.
  void follow(std::size_t plan, std::int64_t from_us);

  const SegmentRun& now() const { return runs_.back(); }
  const std::vector<SegmentRun>& runs() const { return runs_; }

  // Set points meant from `from_us` to `to_us` on average, by the recipe's times from the present segment on;
  // past the last segment its values go on.
  SetPoints planned_means(const Recipe& recipe, std::int64_t from_us, std::int64_t to_us) const;
  double elapsed_min(std::int64_t at_us) const;
  double segment_left_min(const Recipe& recipe, std::int64_t at_us) const;  // not below 0
  double minutes_left(const Recipe& recipe, std::int64_t at_us) const;      // negative past the end
  // How much longer than planned (or than its due moment) the present segment has run; 0 within its time.
  double long_by_min(const Recipe& recipe, std::int64_t at_us) const;
  // A sentence where it is not sure; empty where it is.
  std::string doubt(const Recipe& recipe) const;

 private:
  std::int64_t planned_end_us(const Recipe& recipe) const;  // of the present segment
  void enter(std::size_t index, std::int64_t from_us, PlacedBy by);

  std::vector<SegmentRun> runs_;
  bool been_here_ = false;                  // whether the furnace has read like this segment
  std::optional<std::int64_t> due_us_;      // since when `until` is reached
  std::optional<std::int64_t> left_us_;     // since when the furnace no longer reads like this segment
  std::optional<std::int64_t> next_us_;     // since when it reads like the next
  std::optional<std::int64_t> nowhere_us_;  // since when it reads like neither, without going there
  std::optional<double> last_degc_;
  FurnaceSight last_;
};

}  // namespace hearthfront::server
