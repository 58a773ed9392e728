// The parts of the result document that snapshots share. Internal to server: brings nlohmann's header.
#pragma once

#include "server/live/definition_fields.h"
#include "server/live/run_result.h"

namespace hearthfront::server {

Json result_items_json(const RunResult& result);
Json result_notes_json(const RunResult& result);
Json result_gaps_json(const RunResult& result);
Json criterion_result_json(const Criterion& criterion);  // with carbon limit and words
Json number_or_null(std::optional<double> value);
std::string carbon_source(const RunResult& result);  // of the newest interval, in words
Json result_segments_json(const RunResult& result);

Json band_json(const solver::Band& band, double factor = 1);
Json window_chance_json(const solver::WindowChance& chance, const char* below, const char* above);

// What stands in a document's "band".
const char* band_words(const RunResult& result);
inline constexpr const char* band_not_computed = "band not computed";
inline constexpr const char* band_is = "5 to 95 %";

}  // namespace hearthfront::server
