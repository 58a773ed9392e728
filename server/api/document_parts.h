// Pieces of JSON that several documents share. Internal to server/api: brings nlohmann's header.
#pragma once

#include "server/base/json_fields.h"
#include "server/base/plant.h"
#include "storage/store.h"

namespace hearthfront::server {

const char* state_of(const storage::LoadRow& row);  // "open", "ended", "cancelled"
Json chambers_json(const Furnace& furnace);

}  // namespace hearthfront::server
