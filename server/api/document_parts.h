// Pieces of JSON that several documents share. Internal to server/api: brings nlohmann's header.
#pragma once

#include "server/base/json_fields.h"
#include "server/base/plant.h"
#include "server/live/view.h"
#include "storage/store.h"

namespace hearthfront::server {

const char* state_of(const storage::LoadRow& row);  // "open", "ended", "cancelled"
Json chambers_json(const Furnace& furnace);
Json time_or_null(std::optional<std::int64_t> time_us);
Json age_or_null(std::optional<std::int64_t> time_us, std::int64_t now_us);
// Of one load's view, for the floor and for its own page.
Json inputs_json(const LoadView& view);
Json segment_json(const LoadView& view);
Json position_json(const LoadView& view, const Furnace& furnace);  // null where it is on no line

}  // namespace hearthfront::server
