// The outlook: from the present ensemble along a plan to the end of the cycle. Pure; deterministic in its
// inputs.
//
// A plan is the rest of the recipe from now on. The furnace follows it with its own sluggishness
// (FurnaceResponse); what it shows beside the set point now is carried on and decays. Projection steps are
// longer than live ones (up to 10 min); against one-minute steps the end depth moves by less than 1 um
// (tests).
#pragma once

#include <cstddef>
#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "solver/outlook/draws.h"
#include "solver/outlook/statistics.h"
#include "solver/process/gas_carburizing.h"

namespace hearthfront::solver {

// What ends a planned segment other than its time, decided on the nominal lane.
struct PlannedUntil {
  enum class Kind { case_depth_m, surface_carbon_wt_pct, part_temperature_within_k };
  Kind kind = Kind::case_depth_m;
  std::size_t item = 0;  // not for part_temperature (all items)
  double limit = 0;
  double longest_s = 0;
};

struct PlannedSegment {
  double duration_s = 0;  // of what is left of it; with `until` an estimate that is not used
  double temperature_degc = 0, carbon_potential_wt_pct = 0;
  double ramp_s = 0;  // set points run straight from those before over the first ramp_s
  std::optional<PlannedUntil> until;
};

// What the furnace does beside its set points. Time constants and rate are common practice, no source.
struct FurnaceResponse {
  double temperature_degc = 0, carbon_potential_wt_pct = 0;      // what it shows now
  double offset_k = 0, offset_carbon_potential_wt_pct = 0;       // steady part of shown minus set, carried on
  double decay_s = 4 * 3600;                                     // of the offsets
  double temperature_lag_s = 600, carbon_potential_lag_s = 720;  // how it follows a changed set point
  double fastest_rise_k_per_s = 0.15;                            // while it heats up
};

using Window = std::pair<double, double>;  // low, high

struct OutlookItem {
  const GasCarburizing* model = nullptr;         // with the item's lanes
  const GasCarburizing::State* state = nullptr;  // now
  const std::vector<double>* criterion_offset_wt_pct = nullptr;
  double criterion_wt_pct = 0;  // carbon the case depth is read at
  double grinding_stock_m = 0;
  Window case_depth_window_m{0, 0};  // of the finished part
  std::optional<Window> surface_carbon_window_wt_pct;
  // Scatter of a lab's case depth beside what is true: one sigma of the limit in wt% carbon at this
  // criterion, and of the position. Hardness 2 % of 550 HV is about 0.017 wt%.
  double lab_carbon_sd_wt_pct = 0.017, lab_position_sd_m = 15e-6;
};

struct StandingLimits {
  double inside_from = 0.8, missed_from = 0.5;
};
enum class Standing { inside, shallow, deep, undecided };
const char* text(Standing standing);

struct WindowChance {
  double below = 0, inside = 0, above = 0;  // sum 1
};

struct ItemOutlook {
  Band case_depth_m{};  // finished part
  double nominal_case_depth_m = 0;
  Band surface_carbon_wt_pct{};
  WindowChance case_depth, surface_carbon;  // of the true values; surface_carbon all inside without a window
  WindowChance lab_case_depth;              // of what a lab would measure
  double joint_chance = 0;                  // all windows of the item
  Standing standing = Standing::undecided;
};

// What all items look like at one moment, `at_s` after now.
struct OutlookMoment {
  double at_s = 0;
  std::vector<ItemOutlook> items;
  double joint_chance = 0;           // all windows of all items
  std::size_t controlling_item = 0;  // the one with the least joint chance
};

struct Outlook {
  OutlookMoment end;                  // of the plan
  std::vector<OutlookMoment> course;  // ascending: now, along the plan, and beyond its end; includes the end
  // Of all moments of the last segment and beyond its end: when the joint chance is highest.
  double best_at_s = 0, best_joint_chance = 0;
  std::vector<double> segment_ends_s;  // of each planned segment, after now
  bool failed = false;                 // a model failed: nothing else is meant
};

struct OutlookOptions {
  StandingLimits limits;
  double course_step_s = 900;   // spacing of `course`
  double beyond_s = 4 * 3600;   // how far beyond the end to look for a better one
  double longest_step_s = 600;  // of the projection
};

Outlook project(const std::vector<OutlookItem>& items, const std::vector<PlannedSegment>& plan,
                const FurnaceResponse& furnace, const IntervalInputs& now,
                const OutlookOptions& options = {});

// Case depths of the finished parts now, one band for each item.
std::vector<Band> case_depth_bands_m(const std::vector<OutlookItem>& items);

// What is known of the items at this moment alone: `now` bands and chances.
OutlookMoment read_moment(const std::vector<OutlookItem>& items, const StandingLimits& limits);

}  // namespace hearthfront::solver
