// Alerts as JSON: on the floor, in their own documents, and in messages. Pure. Internal to the server's .cpp
// files: brings nlohmann's header.
#pragma once

#include <cstdint>
#include <functional>
#include <optional>
#include <string>
#include <string_view>

#include "server/base/json_fields.h"
#include "server/base/plant.h"
#include "storage/store.h"

namespace hearthfront::server {

struct AlertNames {
  const Plant& plant;
  std::function<std::optional<std::string>(std::int64_t load)> load_name;
};

// As on the floor: {"id", "kind", "severity", "sentence", "advice", "since", "acknowledged", "shelved"}.
Json alert_summary_json(const storage::AlertRow& row);
// The whole alert; "delivery" only where counts are given.
Json alert_json(const storage::AlertRow& row, const AlertNames& names,
                const std::optional<storage::DeliveryCounts>& counts);
// {"event", "key", "alert", "plant", "at"}; `at_us` on the daemon's clock.
std::string alert_payload(const storage::AlertRow& row, std::string_view event, std::string_view key,
                          std::int64_t at_us, const AlertNames& names);

}  // namespace hearthfront::server
