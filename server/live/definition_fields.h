// The JSON forms of a load's parts, shared by the definition and the result documents. Internal to
// server: brings nlohmann's header.
#pragma once

#include "server/base/json_fields.h"
#include "server/live/load_definition.h"

namespace hearthfront::server {

Json composition_json(const solver::Composition& composition);
Json channel_json(const Channel& channel);
Json criterion_json(const Criterion& criterion);
Json section_json(const ItemSection& section);
Json recipe_json(const Recipe& recipe);
Json window_json(const Window& window);
Json load_body_json(const LoadDefinition& load);

Json quench_json(const Quench& quench);
Json furnace_copy_json(const Furnace& furnace);
// A part as the library keeps it: an item without name, quantity and history.
Json part_json(const Item& item);

Recipe read_recipe(const Json& recipe, const std::string& path);
// Segments under `key`, 1-40.
std::vector<Segment> read_segments(JsonFields& fields, const std::string& key);
std::vector<AdoptedPlan> read_plans(JsonFields& load, const LoadDefinition& definition);
Quench read_quench(JsonFields& load);
// The figures of the drawing, of a load's item or of a library part. Leaves finish() to the caller.
void read_part(JsonFields& fields, Item& item, const Plant& plant, double default_lag_min);
// After quench and item are known: the carbon content that the criterion means.
void settle_criterion(Item& item, const Quench& quench, const std::string& path);
Item read_item(const Json& entry, const std::string& path, const Plant& plant, double default_lag_min);
std::optional<LibraryCopy> read_library_copy(JsonFields& fields);
std::vector<PathStep> read_path(JsonFields& load, const Plant& plant, std::int64_t started_us,
                                std::optional<std::int64_t> ended_us);
std::vector<MaskSpan> read_masks(JsonFields& load);
Furnace read_furnace_copy(const Json& json);

inline constexpr const char* invalid_load = "invalid-load";

}  // namespace hearthfront::server
