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

double LoadDefinition::planned_minutes() const {
  double sum = 0;
  for (const Segment& segment : recipe.segments) sum += segment.duration_min;
  return sum;
}

std::int64_t LoadDefinition::planned_end_us() const {
  return started_us + std::llround(planned_minutes() * 60e6);
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
