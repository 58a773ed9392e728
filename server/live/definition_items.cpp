#include <algorithm>
#include <array>
#include <cmath>
#include <cstdio>
#include <functional>
#include <limits>

#include "server/live/definition_fields.h"
#include "solver/material/case_hardness.h"
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
  return criterion;
}

// The carbon content at which the case has the hardness the drawing names, by the measured table alone: the
// few per cent of austenite near that carbon are in the table already.
std::optional<double> carbon_of(const Item& item, const Quench& quench) {
  const Criterion& criterion = item.criterion;
  const auto hv = criterion.kind == CriterionKind::hardness_hrc ? solver::hv_from_hrc(criterion.limit)
                                                                : std::optional(criterion.limit);
  if (!hv) return std::nullopt;
  return solver::carbon_for_hardness_hv(*hv, item.steel.composition,
                                        {criterion.martensite_pct, std::nullopt, quench.tempering});
}

InitialProfile read_initial(JsonFields& item) {
  JsonFields fields(item.object("initial_profile"), item.path_of("initial_profile"), invalid_load);
  InitialProfile initial;
  if (fields.has("load")) initial.load = fields.integer("load", 1, 2'000'000'000);
  if (fields.has("item")) initial.item = fields.word("item", 40);
  const auto column = [&](const char* name, double low, double high, std::vector<double>& into) {
    for (const Json& value : fields.array(name, 4, 2000)) {
      const double number = value.is_number() ? value.get<double>() : high + 1;
      if (!(number >= low && number <= high))
        fields.fail(name, "expected numbers from " + rounded(low) + " to " + rounded(high) + ".");
      into.push_back(number);
    }
  };
  column("depth_mm", 0, 1000, initial.depth_mm);
  column("carbon_wt_pct", 0, 2.5, initial.carbon_wt_pct);
  if (initial.depth_mm.size() != initial.carbon_wt_pct.size() || initial.depth_mm.front() != 0 ||
      !std::is_sorted(initial.depth_mm.begin(), initial.depth_mm.end(), std::less_equal<>{}))
    fields.fail("depth_mm", "expected as many depths as carbon contents, from 0 inward.");
  fields.finish();
  return initial;
}

}  // namespace

std::optional<LibraryCopy> read_library_copy(JsonFields& fields) {
  if (!fields.has("library")) return std::nullopt;
  JsonFields copy(fields.object("library"), fields.path_of("library"), invalid_load);
  LibraryCopy library{copy.word("key", 80), copy.integer("version", 1, 1'000'000)};
  copy.finish();
  return library;
}

void read_part(JsonFields& fields, Item& item, const Plant& plant, double default_lag_min) {
  item.part = fields.has("part") ? fields.word("part", 80) : item.name;
  item.steel = read_steel(fields, plant);
  item.core_carbon_wt_pct = fields.has("core_carbon_wt_pct")
                                ? fields.number("core_carbon_wt_pct", 0.02, 0.6, "wt%")
                                : item.steel.composition.c_wt_pct;
  item.section = read_section(fields);
  item.criterion = read_criterion(fields);
  item.case_depth_window_mm = read_window(fields, "case_depth_window_mm", 0.02, 20, "mm");
  if (fields.has("surface_carbon_window_wt_pct"))
    item.surface_carbon_window_wt_pct = read_window(fields, "surface_carbon_window_wt_pct", 0.2, 1.5, "wt%");
  if (fields.has("grinding_stock_mm"))
    item.grinding_stock_mm = fields.number("grinding_stock_mm", 0, 2, "mm");
  item.lag_min = fields.has("lag_min") ? fields.number("lag_min", 0, 600, "minutes") : default_lag_min;
  if (item.case_depth_window_mm.second + item.grinding_stock_mm > item.section.reach_mm())
    fields.fail("case_depth_window_mm",
                "the case asked for (with grinding stock) is deeper than the part, whose section is " +
                    rounded(item.section.reach_mm()) + " mm from the surface to its middle.");
}

void settle_criterion(Item& item, const Quench& quench, const std::string& path) {
  const auto fail = [&](const std::string& detail) {
    throw Problem{422, invalid_load, "The value cannot be used", path + ".criterion: " + detail,
                  path + ".criterion"};
  };
  Criterion& criterion = item.criterion;
  if (criterion.kind != CriterionKind::carbon) {
    const auto carbon = carbon_of(item, quench);
    if (!carbon)
      fail("no carbon content up to 0.6 % gives " + criterion.text() +
           "; choose a lower hardness or a higher share of martensite.");
    criterion.carbon_limit_wt_pct = carbon.value_or(0);
  }
  if (item.core_carbon_wt_pct >= criterion.carbon_limit_wt_pct)
    fail("the core (" + rounded(item.core_carbon_wt_pct) + " % carbon) already meets " + criterion.text() +
         " (" + rounded(criterion.carbon_limit_wt_pct) + " % carbon), so it marks no case.");
}

Item read_item(const Json& entry, const std::string& path, const Plant& plant, double default_lag_min) {
  JsonFields fields(entry, path, invalid_load);
  Item item;
  item.name = fields.word("name", 40);
  item.quantity = fields.has("quantity") ? fields.integer("quantity", 1, 1'000'000) : 1;
  read_part(fields, item, plant, default_lag_min);
  item.library = read_library_copy(fields);
  if (fields.has("rework_of"))
    fields.fail("rework_of",
                "only the daemon can look up an earlier load; a load file carries its profile as "
                "initial_profile.");
  if (fields.has("initial_profile")) {
    item.initial = read_initial(fields);
    const double reach = item.section.reach_mm();
    if (std::fabs(item.initial->depth_mm.back() - reach) > 0.05 * reach)
      fields.fail("initial_profile", "reaches " + rounded(item.initial->depth_mm.back()) +
                                         " mm deep, but this section " + rounded(reach) +
                                         " mm: rework needs the section of the earlier load.");
  }
  fields.finish();
  return item;
}

}  // namespace hearthfront::server
