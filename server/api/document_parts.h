// Pieces of JSON that several documents share. Internal to server/api: brings nlohmann's header.
#pragma once

#include "server/alerts/alert_list.h"
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

// Active alerts of a load, with `furnace` those of the whole furnace too; and of a furnace or (with no name)
// of the daemon itself, without those of its loads. Worst first.
Json load_alerts_json(const AlertList& alerts, std::int64_t load, const std::string& furnace = "");
Json furnace_alerts_json(const AlertList& alerts, const std::string& furnace);

}  // namespace hearthfront::server
