#include "server/live/load_definition.h"

#include <cmath>
#include <cstdio>

namespace hearthfront::server {

std::string Criterion::text() const {
  char line[80];
  switch (kind) {
    case CriterionKind::hardness_hv:
      std::snprintf(line, sizeof line, "%.0f HV at %.0f %% martensite", limit, martensite_pct);
      break;
    case CriterionKind::hardness_hrc:
      std::snprintf(line, sizeof line, "%.4g HRC at %.0f %% martensite", limit, martensite_pct);
      break;
    case CriterionKind::carbon:
      std::snprintf(line, sizeof line, "%.2f %% carbon", limit);
      break;
  }
  return line;
}

double ItemSection::reach_mm() const {
  switch (shape) {
    case solver::Shape::plate:
      return thickness_mm / 2;
    case solver::Shape::cylinder:
    case solver::Shape::sphere:
      return diameter_mm / 2;
    case solver::Shape::bore:
      return wall_mm;
  }
  return 0;
}

solver::Section ItemSection::in_metres() const {
  return {shape, reach_mm() * 1e-3, bore_diameter_mm / 2 * 1e-3};
}

void LoadDefinition::end_at(std::int64_t time_us) {
  ended_us = time_us;
  std::erase_if(plans, [&](const AdoptedPlan& plan) { return plan.from_us >= time_us; });
}

const Furnace* LoadDefinition::furnace(std::string_view id) const {
  for (const Furnace& each : furnaces)
    if (each.id == id) return &each;
  return nullptr;
}

const PathStep& LoadDefinition::place_at(std::int64_t time_us) const {
  const PathStep* place = &path.front();
  for (const PathStep& step : path)
    if (step.from_us <= time_us) place = &step;
  return *place;
}

const PathStep& LoadDefinition::last_furnace_place() const {
  const PathStep* place = &path.front();
  for (const PathStep& step : path)
    if (!step.outside()) place = &step;
  return *place;
}

std::optional<std::int64_t> LoadDefinition::until_us(std::size_t index) const {
  return index + 1 < path.size() ? std::optional(path[index + 1].from_us) : ended_us;
}

std::string_view text(solver::Shape shape) {
  switch (shape) {
    case solver::Shape::plate:
      return "plate";
    case solver::Shape::cylinder:
      return "cylinder";
    case solver::Shape::sphere:
      return "sphere";
    case solver::Shape::bore:
      return "bore";
  }
  return "";
}

std::string_view text(Until::Kind kind) {
  switch (kind) {
    case Until::Kind::case_depth:
      return "case_depth";
    case Until::Kind::surface_carbon:
      return "surface_carbon";
    case Until::Kind::part_temperature:
      return "part_temperature";
  }
  return "";
}

std::string_view text(CriterionKind kind) {
  switch (kind) {
    case CriterionKind::hardness_hv:
      return "hardness_hv";
    case CriterionKind::hardness_hrc:
      return "hardness_hrc";
    case CriterionKind::carbon:
      return "carbon";
  }
  return "";
}

}  // namespace hearthfront::server
