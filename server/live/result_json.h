// The result document: what GET /api/v1/loads/{id}/result answers and `replay` prints, to the last byte.
// Deterministic: no wall-clock time, numbers in their shortest exact form. README.md describes it.
#pragma once

#include <string>

#include "server/live/run_result.h"

namespace hearthfront::server {

std::string result_json(const RunResult& result);

// A table for people, for `replay` without --json.
std::string result_table(const RunResult& result);

}  // namespace hearthfront::server
