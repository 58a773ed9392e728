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

namespace hearthfront::server {

struct Segment {
  std::string name;
  double duration_min = 0;
  double temperature_degc = 0;
  double carbon_potential_wt_pct = 0;
};

struct Recipe {
  std::string name;
  std::vector<Segment> segments;
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
  Window case_depth_window_mm{0, 0};
  std::optional<Window> surface_carbon_window_wt_pct;
  double lag_min = 20;
};

struct LoadDefinition {
  std::string name, chamber, person;
  Furnace furnace;  // the copy
  std::int64_t started_us = 0;
  std::optional<std::int64_t> ended_us;
  double charge_temperature_degc = 20;
  double lattice_s = 60;
  Recipe recipe;
  std::vector<Item> items;
  std::string model_version;

  double planned_minutes() const;
  std::int64_t planned_end_us() const;
};

std::string_view text(solver::Shape shape);
std::string_view text(CriterionKind kind);

}  // namespace hearthfront::server
