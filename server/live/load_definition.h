// A load as the model needs it: its own complete copy of steels, furnace settings and recipe, so that no
// later edit of a library can change a past load. Plain data; made by definition_json from a request body
// and the plant, or from the copy stored with the load.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "server/base/plant.h"
#include "solver/diffusion/mesh.h"
#include "solver/material/tempering.h"

namespace hearthfront::server {

// What ends a segment other than its time. The furnace's controller decides; the model says when it is due.
struct Until {
  enum class Kind { case_depth, surface_carbon, part_temperature };
  Kind kind = Kind::case_depth;
  std::string item;  // case_depth, surface_carbon
  double limit = 0;  // mm, wt%, or how near to the set point in K
};
std::string_view text(Until::Kind kind);

struct Segment {
  std::string name;
  double duration_min = 0;  // with `until`: the estimate
  double temperature_degc = 0;
  double carbon_potential_wt_pct = 0;
  double ramp_min = 0;  // the set points run straight from those before over the first ramp_min
  double tolerance_min = 10;
  std::optional<Until> until;
  double longest_min = 0;  // with `until`
};

// Which version of a library entry something was copied from; information only.
struct LibraryCopy {
  std::string key;
  std::int64_t version = 0;
};

struct Recipe {
  std::string name;
  std::vector<Segment> segments;
  std::optional<LibraryCopy> library;
  bool temperature_may_change = false;  // by a proposal
};

// From when a load was where: a chamber, or outside any furnace (empty names).
struct PathStep {
  std::int64_t from_us = 0;
  std::string furnace, chamber;
  bool outside() const { return furnace.empty(); }
  bool operator==(const PathStep&) const = default;
};

struct Quench {
  double temperature_degc = 60;  // the lowest the parts reach
  std::optional<solver::Tempering> tempering;
};

// The carbon an item came with from an earlier load (rework).
struct InitialProfile {
  std::int64_t load = 0;
  std::string item;
  std::vector<double> depth_mm, carbon_wt_pct;
};

// A stretch of a channel that the model takes nothing of.
struct MaskSpan {
  std::string furnace, channel;
  std::int64_t from_us = 0, to_us = 0;
  std::string reason;
};

enum class CriterionKind { hardness_hv, hardness_hrc, carbon };

// How the drawing defines the case: depth to a hardness (as quenched, at a stated share of martensite) or
// to a carbon content. `carbon_limit_wt_pct` is what the profile is read at in either case.
struct Criterion {
  CriterionKind kind = CriterionKind::hardness_hv;
  double limit = 550;  // HV, HRC or wt%
  double martensite_pct = 95;
  double carbon_limit_wt_pct = 0;

  std::string text() const;  // "550 HV at 95 % martensite"
};

using Window = std::pair<double, double>;  // low, high

// A section in the figures it was given in, so that a copy of a copy says the same to the last bit. Which
// members count depends on the shape.
struct ItemSection {
  solver::Shape shape = solver::Shape::plate;
  double thickness_mm = 0;                   // plate, carburized from both sides
  double diameter_mm = 0;                    // solid cylinder, sphere
  double bore_diameter_mm = 0, wall_mm = 0;  // bore

  double reach_mm() const;  // from the carburized surface to the middle, or through the wall
  solver::Section in_metres() const;
};

struct Item {
  std::string name, part;
  int quantity = 1;
  solver::Steel steel;
  double core_carbon_wt_pct = 0;
  ItemSection section;
  Criterion criterion;
  Window case_depth_window_mm{0, 0};  // of the finished part
  std::optional<Window> surface_carbon_window_wt_pct;
  double grinding_stock_mm = 0;  // taken off after hardening
  double lag_min = 20;
  std::optional<LibraryCopy> library;
  std::optional<InitialProfile> initial;
};

// A changed rest of the recipe that a person adopted: it is the recipe from `from_us` on, and says nothing
// about what was before.
struct AdoptedPlan {
  std::int64_t from_us = 0;
  std::string person, reason;
  Recipe recipe;
};

struct LoadDefinition {
  std::string name, person;
  std::vector<Furnace> furnaces;  // copies of those on the path; the first is where it began
  std::vector<PathStep> path;     // at least one; the first is in a furnace, from started_us
  std::int64_t started_us = 0;
  std::optional<std::int64_t> ended_us;
  double charge_temperature_degc = 20;
  double lattice_s = 60;
  double film_min = 0;  // slow start of the surface
  Quench quench;
  Recipe recipe;
  std::vector<AdoptedPlan> plans;  // ascending
  std::vector<Item> items;
  std::vector<MaskSpan> masks;
  std::string model_version;

  // Plans from then on never came into force and are dropped.
  void end_at(std::int64_t time_us);

  // 0: the recipe that the load began with; n: the n-th adopted plan.
  const Recipe& recipe_of(std::size_t plan) const { return plan == 0 ? recipe : plans[plan - 1].recipe; }
  const Furnace& first_furnace() const { return furnaces.front(); }
  const Furnace* furnace(std::string_view id) const;
  const PathStep& place_at(std::int64_t time_us) const;
  const PathStep& last_place() const { return path.back(); }
  const PathStep& last_furnace_place() const;  // the last that was in a furnace
  // When the path step `index` ends: with the next, or with the load.
  std::optional<std::int64_t> until_us(std::size_t index) const;
};

std::string_view text(solver::Shape shape);
std::string_view text(CriterionKind kind);

}  // namespace hearthfront::server
