#include <array>
#include <cmath>
#include <cstdio>
#include <limits>

#include "server/live/definition_fields.h"
#include "solver/material/hardness.h"

namespace hearthfront::server {
namespace {

std::string rounded(double value) {
  char line[32];
  std::snprintf(line, sizeof line, "%.3g", value);
  return line;
}

Window read_window(JsonFields& item, std::string_view name, double low, double high, std::string_view unit) {
  const Json& pair = item.array(name, 2, 2);
  const bool numbers = pair[0].is_number() && pair[1].is_number();
  const double from = numbers ? pair[0].get<double>() : 0, to = numbers ? pair[1].get<double>() : 0;
  if (!numbers || !(from >= low && to <= high && from < to))
    item.fail(name, "expected two numbers, the smaller first, from " + rounded(low) + " to " + rounded(high) +
                        " " + std::string(unit) +
                        (numbers ? ", found " + rounded(from) + " and " + rounded(to) : "") + ".");
  return {from, to};
}

solver::Steel read_steel(JsonFields& item, const Plant& plant) {
  const Json& value = item.any("steel");
  if (value.is_string()) {
    const SteelEntry* entry = plant.steel(value.get_ref<const std::string&>());
    if (!entry)
      throw Problem{
          422, "unknown-steel", "The steel is not in the library",
          item.path_of("steel") + ": \"" + value.get<std::string>() +
              "\" is not in the steel library. GET /api/v1/steels lists it; a heat's own analysis may be "
              "given as {\"name\", \"composition_wt_pct\"}.",
          item.path_of("steel")};
    return entry->steel;
  }
  JsonFields fields(value, item.path_of("steel"), invalid_load);
  solver::Steel steel;
  steel.name = fields.word("name", 60);
  JsonFields c(fields.object("composition_wt_pct"), fields.path_of("composition_wt_pct"), invalid_load);
  const auto element = [&](const char* name, double high) {
    return c.has(name) ? c.number(name, 0, high, "wt%") : 0.0;
  };
  steel.composition.c_wt_pct = c.number("C", 0.02, 0.6, "wt%");
  steel.composition.mn_wt_pct = element("Mn", 2.5);
  steel.composition.cr_wt_pct = element("Cr", 3.0);
  steel.composition.ni_wt_pct = element("Ni", 5.0);
  steel.composition.mo_wt_pct = element("Mo", 1.0);
  steel.composition.si_wt_pct = element("Si", 1.0);
  c.finish();
  fields.finish();
  return steel;
}

ItemSection read_section(JsonFields& item) {
  JsonFields fields(item.object("section"), item.path_of("section"), invalid_load);
  const std::string shape = fields.word("shape", 20);
  ItemSection section;
  if (shape == "plate") {
    section.thickness_mm = fields.number("thickness_mm", 0.4, 1000, "mm");
  } else if (shape == "cylinder" || shape == "sphere") {
    section.shape = shape == "cylinder" ? solver::Shape::cylinder : solver::Shape::sphere;
    section.diameter_mm = fields.number("diameter_mm", 0.4, 1000, "mm");
  } else if (shape == "bore") {
    section.shape = solver::Shape::bore;
    section.bore_diameter_mm = fields.number("bore_diameter_mm", 0.4, 1000, "mm");
    section.wall_mm = fields.number("wall_mm", 0.2, 500, "mm");
  } else {
    fields.fail("shape", "expected plate, cylinder, sphere or bore.");
  }
  fields.finish();
  return section;
}

Criterion read_criterion(JsonFields& item) {
  Criterion criterion;
  if (item.has("criterion")) {
    JsonFields fields(item.object("criterion"), item.path_of("criterion"), invalid_load);
    const std::string kind = fields.word("kind", 20);
    if (kind == "carbon") {
      criterion.kind = CriterionKind::carbon;
      criterion.limit = criterion.carbon_limit_wt_pct = fields.number("limit_wt_pct", 0.1, 1.2, "wt%");
    } else if (kind == "hardness_hv") {
      criterion.limit = fields.number("limit_hv", 238, 832, "HV");
    } else if (kind == "hardness_hrc") {
      criterion.kind = CriterionKind::hardness_hrc;
      criterion.limit = fields.number("limit_hrc", 20, 65, "HRC");
    } else {
      fields.fail("kind", "expected hardness_hv, hardness_hrc or carbon.");
    }
    if (criterion.kind != CriterionKind::carbon && fields.has("martensite_pct"))
      criterion.martensite_pct = fields.number("martensite_pct", 50, 99, "%");
    fields.finish();
  }
  if (criterion.kind == CriterionKind::carbon) return criterion;
  const auto hrc = criterion.kind == CriterionKind::hardness_hrc ? std::optional(criterion.limit)
                                                                 : solver::hrc_from_hv(criterion.limit);
  const auto carbon = hrc ? solver::carbon_for_hardness_hrc(*hrc, criterion.martensite_pct) : std::nullopt;
  if (!carbon)
    item.fail("criterion", "no carbon content up to 0.6 % gives " + criterion.text() +
                               "; choose a lower hardness or a higher share of martensite.");
  criterion.carbon_limit_wt_pct = *carbon;
  return criterion;
}

}  // namespace

Recipe read_recipe(JsonFields load) {
  JsonFields fields(load.object("recipe"), "recipe", invalid_load);
  Recipe recipe;
  recipe.name = fields.word("name", 80);
  double total_min = 0;
  const Json& segments = fields.array("segments", 1, 40);
  for (std::size_t i = 0; i < segments.size(); ++i) {
    JsonFields s(segments[i], "recipe.segments[" + std::to_string(i) + "]", invalid_load);
    Segment segment;
    segment.name = s.word("name", 40);
    segment.duration_min = s.number("duration_min", 0.5, 30'000, "minutes");
    segment.temperature_degc = s.number("temperature_degc", 20, 1150, "degC");
    segment.carbon_potential_wt_pct = s.number("carbon_potential_wt_pct", 0, 1.8, "wt%");
    s.finish();
    total_min += segment.duration_min;
    recipe.segments.push_back(std::move(segment));
  }
  fields.finish();
  if (total_min > 30'000)
    fields.fail("segments",
                "the recipe lasts " + rounded(total_min / 60) + " hours; at most 500 hours make sense.");
  return recipe;
}

Item read_item(const Json& entry, const std::string& path, const Plant& plant, const Furnace& furnace) {
  JsonFields fields(entry, path, invalid_load);
  Item item;
  item.name = fields.word("name", 40);
  item.part = fields.has("part") ? fields.word("part", 80) : item.name;
  item.quantity = fields.has("quantity") ? fields.integer("quantity", 1, 1'000'000) : 1;
  item.steel = read_steel(fields, plant);
  item.core_carbon_wt_pct = fields.has("core_carbon_wt_pct")
                                ? fields.number("core_carbon_wt_pct", 0.02, 0.6, "wt%")
                                : item.steel.composition.c_wt_pct;
  item.section = read_section(fields);
  item.criterion = read_criterion(fields);
  item.case_depth_window_mm = read_window(fields, "case_depth_window_mm", 0.02, 20, "mm");
  if (fields.has("surface_carbon_window_wt_pct"))
    item.surface_carbon_window_wt_pct = read_window(fields, "surface_carbon_window_wt_pct", 0.2, 1.5, "wt%");
  item.lag_min = fields.has("lag_min") ? fields.number("lag_min", 0, 600, "minutes") : furnace.lag_min;
  for (const char* optional :
       {"part", "quantity", "core_carbon_wt_pct", "criterion", "surface_carbon_window_wt_pct", "lag_min"})
    fields.ignore_null(optional);
  fields.finish();

  if (item.case_depth_window_mm.second > item.section.reach_mm())
    fields.fail("case_depth_window_mm", "the case asked for is deeper than the part, whose section is " +
                                            rounded(item.section.reach_mm()) +
                                            " mm from the surface to its middle.");
  if (item.core_carbon_wt_pct >= item.criterion.carbon_limit_wt_pct)
    fields.fail("criterion", "the core (" + rounded(item.core_carbon_wt_pct) + " % carbon) already meets " +
                                 item.criterion.text() + " (" + rounded(item.criterion.carbon_limit_wt_pct) +
                                 " % carbon), so it marks no case.");
  return item;
}

}  // namespace hearthfront::server
