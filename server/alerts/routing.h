// Where an alert is told. Delivery answers the question; the book asks it and writes the messages into the
// outbox in the same transaction as the alert.
#pragma once

#include <cstdint>
#include <functional>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "storage/store.h"

namespace hearthfront::server {

// One target that wants this alert. With a time it is told only once the alert has been active and not
// acknowledged for so long; later events reach it only if it was told.
struct Route {
  std::string target;
  std::optional<double> after_unacknowledged_min;
};

// `event`: "raised", "came back", "worse", "back from the shelf", "escalated", "cleared". Must be fast, must
// not block or throw, and say the same for the same question.
using RouteFunction = std::function<std::vector<Route>(const storage::AlertRow&, std::string_view event)>;

// The text of a message; alert_json.h has the daemon's.
using PayloadFunction = std::function<std::string(const storage::AlertRow&, std::string_view event,
                                                  std::string_view key, std::int64_t at_us)>;

}  // namespace hearthfront::server
