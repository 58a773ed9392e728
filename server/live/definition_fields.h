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

Recipe read_recipe(JsonFields load);
Item read_item(const Json& entry, const std::string& path, const Plant& plant, const Furnace& furnace);

inline constexpr const char* invalid_load = "invalid-load";

}  // namespace hearthfront::server
