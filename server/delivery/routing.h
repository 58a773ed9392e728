// Which target is told of which alert. Pure, any thread.
#pragma once

#include <string>
#include <vector>

#include "server/alerts/routing.h"
#include "server/base/target.h"
#include "storage/store.h"

namespace hearthfront::server {

// By furnace, kind and severity as they are now. Nobody is told of messages to himself that are stuck.
bool wants(const DeliveryTarget& target, const storage::AlertRow& alert);

// Those that want it, in the order of the settings; what the book of alerts asks.
std::vector<Route> routes_of(const std::vector<DeliveryTarget>& targets, const storage::AlertRow& alert);

// The kinds of alert that the rules raise, which a target's `kinds` may name. A test reads them from the
// rules.
const std::vector<std::string>& alert_kinds();

// What it wants in one sentence: "Urgent alerts, furnaces pit-2, at once."
std::string routes_sentence(const DeliveryTarget& target);

}  // namespace hearthfront::server
