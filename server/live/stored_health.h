// The health of a channel from its stored readings. One thread at a time for each reader.
#pragma once

#include <cstdint>
#include <functional>
#include <string>

#include "server/base/plant.h"
#include "server/live/channel_health.h"
#include "storage/store.h"

namespace hearthfront::server {

// Store id of a plant channel.
using ChannelId = std::function<std::int64_t(const std::string& furnace, const std::string& channel)>;

ChannelHealth stored_health(const Furnace& furnace, const Channel& channel, const ChannelId& id,
                            storage::Reader& reader, std::int64_t now_us);

}  // namespace hearthfront::server
