// Decodes the body of POST /api/v1/readings: {"readings":[{"furnace","channel","time","value"}, ...]}.
// Pure, any thread, memory bounded by the body. A body that cannot be understood as a whole gives a
// Problem and no items; a single bad item carries its own refusal and does not harm its neighbours.
#pragma once

#include <cstddef>
#include <optional>
#include <string_view>
#include <vector>

#include "server/api/http_server.h"
#include "server/ingest/raw_reading.h"

namespace hearthfront::server {

struct DecodedReadings {
  std::vector<RawReading> items;   // in the order of the body
  std::optional<Problem> problem;  // then `items` is empty
};

DecodedReadings decode_readings(std::string_view body, std::size_t max_items);

}  // namespace hearthfront::server
