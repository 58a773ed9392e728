// Reading of what a load goes through: recipe, quench, path, masked stretches.
#include <algorithm>
#include <cmath>
#include <cstdio>

#include "server/base/time_text.h"
#include "server/live/definition_fields.h"

namespace hearthfront::server {
namespace {

constexpr double longest_recipe_min = 30'000;

Until read_until(JsonFields& segment) {
  JsonFields fields(segment.object("until"), segment.path_of("until"), invalid_load);
  Until until;
  const std::string kind = fields.word("kind", 20);
  if (kind == "part_temperature") {
    until.kind = Until::Kind::part_temperature;
    until.limit = fields.number("within_k", 1, 50, "K");
  } else if (kind == "case_depth") {
    until.item = fields.word("item", 40);
    until.limit = fields.number("depth_mm", 0.02, 20, "mm");
  } else if (kind == "surface_carbon") {
    until.kind = Until::Kind::surface_carbon;
    until.item = fields.word("item", 40);
    until.limit = fields.number("wt_pct", 0.2, 1.5, "wt%");
  } else {
    fields.fail("kind", "expected case_depth, surface_carbon or part_temperature.");
  }
  fields.finish();
  return until;
}

Segment read_segment(const Json& json, const std::string& path) {
  JsonFields s(json, path, invalid_load);
  Segment segment;
  segment.name = s.word("name", 40);
  segment.duration_min = s.number("duration_min", 0.5, longest_recipe_min, "minutes");
  segment.temperature_degc = s.number("temperature_degc", 20, 1150, "degC");
  segment.carbon_potential_wt_pct = s.number("carbon_potential_wt_pct", 0, 1.8, "wt%");
  if (s.has("ramp_min")) segment.ramp_min = s.number("ramp_min", 0, segment.duration_min, "minutes");
  if (s.has("tolerance_min")) segment.tolerance_min = s.number("tolerance_min", 0, 1440, "minutes");
  if (s.has("until")) {
    segment.until = read_until(s);
    segment.longest_min = 3 * segment.duration_min;
  }
  if (s.has("longest_min")) {
    if (!segment.until)
      s.fail("longest_min", "belongs to a segment with \"until\"; duration_min is enough here.");
    segment.longest_min = s.number("longest_min", segment.duration_min, longest_recipe_min, "minutes");
  }
  s.finish();
  return segment;
}

}  // namespace

std::vector<Segment> read_segments(JsonFields& fields, const std::string& key) {
  std::vector<Segment> segments;
  double total_min = 0;
  const Json& json = fields.array(key, 1, 40);
  for (std::size_t i = 0; i < json.size(); ++i) {
    segments.push_back(read_segment(json[i], fields.path_of(key) + "[" + std::to_string(i) + "]"));
    total_min += segments.back().duration_min;
  }
  if (total_min > longest_recipe_min)
    fields.fail(key, "they last " + std::to_string(std::lround(total_min / 60)) +
                         " hours; at most 500 hours make sense.");
  return segments;
}

Recipe read_recipe(const Json& json, const std::string& path) {
  JsonFields fields(json, path, invalid_load);
  Recipe recipe;
  recipe.name = fields.word("name", 80);
  recipe.segments = read_segments(fields, "segments");
  if (fields.has("temperature_may_change"))
    recipe.temperature_may_change = fields.flag("temperature_may_change");
  recipe.library = read_library_copy(fields);
  fields.finish();
  return recipe;
}

std::vector<AdoptedPlan> read_plans(JsonFields& load, const LoadDefinition& definition) {
  std::vector<AdoptedPlan> plans;
  if (!load.has("plans")) return plans;
  const Json& json = load.array("plans", 0, 200);
  for (std::size_t i = 0; i < json.size(); ++i) {
    JsonFields fields(json[i], load.path_of("plans") + "[" + std::to_string(i) + "]", invalid_load);
    AdoptedPlan plan;
    plan.from_us = fields.time("from");
    plan.person = fields.word("person", 80);
    plan.reason = fields.word("reason", 400);
    plan.recipe.name = definition.recipe.name;
    plan.recipe.segments = read_segments(fields, "segments");
    fields.finish();
    if (plan.from_us < definition.started_us) fields.fail("from", "the load had not begun by then.");
    if (!plans.empty() && plan.from_us <= plans.back().from_us)
      fields.fail("from", "each plan must be later than the one before it.");
    if (definition.ended_us && plan.from_us >= *definition.ended_us)
      fields.fail("from", "the load had ended by then.");
    plans.push_back(std::move(plan));
  }
  return plans;
}

Quench read_quench(JsonFields& load) {
  Quench quench;
  if (!load.has("quench")) return quench;
  JsonFields fields(load.object("quench"), load.path_of("quench"), invalid_load);
  if (fields.has("temperature_degc"))
    quench.temperature_degc = fields.number("temperature_degc", -196, 250, "degC");
  if (fields.has("tempering")) {
    JsonFields t(fields.object("tempering"), fields.path_of("tempering"), invalid_load);
    // What the law of the hardness drop covers (solver/material/tempering.h).
    quench.tempering = solver::Tempering{t.number("temperature_degc", 150, 204, "degC"),
                                         t.number("hours", 0.5, 10, "hours")};
    t.finish();
  }
  fields.finish();
  return quench;
}

std::vector<PathStep> read_path(JsonFields& load, const Plant& plant, std::int64_t started_us,
                                std::optional<std::int64_t> ended_us) {
  const Json& json = load.array("path", 1, 100);
  std::vector<PathStep> path;
  for (std::size_t i = 0; i < json.size(); ++i) {
    JsonFields step(json[i], load.path_of("path") + "[" + std::to_string(i) + "]", invalid_load);
    PathStep place;
    place.from_us = step.time("from");
    const bool outside = step.has("outside") && step.flag("outside");
    if (!outside) {
      place.furnace = step.word("furnace", 60);
      const Furnace* furnace = plant.furnace(place.furnace);
      if (!furnace) step.fail("furnace", "\"" + place.furnace + "\" is not in the plant file.");
      place.chamber = step.has("chamber") || furnace->chambers.size() > 1 ? step.word("chamber", 60)
                                                                          : furnace->chambers.front().id;
      if (!furnace->chamber(place.chamber)) step.fail("chamber", "the furnace has no chamber with this id.");
    }
    step.finish();
    if (i == 0 && outside) step.fail("outside", "a load begins in a furnace.");
    if (i == 0 && place.from_us != started_us)
      step.fail("from", "the path begins with the load, at " + format_time(started_us) + ".");
    if (i > 0 && place.from_us <= path.back().from_us)
      step.fail("from", "each step must be later than the one before it.");
    if (ended_us && place.from_us >= *ended_us) step.fail("from", "the load had ended by then.");
    if (i > 0 && place.furnace == path.back().furnace && place.chamber == path.back().chamber)
      step.fail("from", "the load was there already.");
    path.push_back(std::move(place));
  }
  return path;
}

std::vector<MaskSpan> read_masks(JsonFields& load) {
  std::vector<MaskSpan> masks;
  if (!load.has("masks")) return masks;
  const Json& json = load.array("masks", 0, 1000);
  for (std::size_t i = 0; i < json.size(); ++i) {
    JsonFields fields(json[i], load.path_of("masks") + "[" + std::to_string(i) + "]", invalid_load);
    MaskSpan mask{fields.word("furnace", 60), fields.word("channel", 60), fields.time("from"),
                  fields.time("to"), fields.word("reason", 80)};
    fields.finish();
    if (mask.to_us <= mask.from_us) fields.fail("to", "must be later than from.");
    masks.push_back(std::move(mask));
  }
  return masks;
}

}  // namespace hearthfront::server
