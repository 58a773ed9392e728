// Which target is told of which alert. Pure, any thread.
#pragma once

#include <string>

#include "server/base/target.h"
#include "storage/store.h"

namespace hearthfront::server {

// By furnace, kind and severity as they are now. Nobody is told of messages to himself that are stuck.
bool wants(const Target& target, const storage::AlertRow& alert);

// What it wants in one sentence: "Urgent alerts, furnaces pit-2, at once."
std::string routes_sentence(const Target& target);

}  // namespace hearthfront::server
