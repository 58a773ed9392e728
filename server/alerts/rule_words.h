// Small helpers of the rules: numbers in sentences, and a place in the findings.
#pragma once

#include <cstdint>
#include <string>
#include <utility>

#include "server/alerts/rules.h"

namespace hearthfront::server {

std::string fixed(double value, int digits);
std::string percent(double share);  // 0-1 as whole percent, "34 %"

inline double minutes(std::int64_t from_us, std::int64_t to_us) {
  return static_cast<double>(to_us - from_us) / 60e6;
}

// The key of a condition of one load.
inline ConditionKey of_load(const LoadView& view, std::string kind, std::string subject) {
  return {std::move(kind), view.row.furnace, view.row.id, std::move(subject)};
}

inline Judged judged_load(const LoadView& view, std::string kind, double clear_hold_min) {
  return {std::move(kind), view.row.furnace,     view.row.id,
          std::nullopt,    view.result.state_us, clear_hold_min * 60};
}

}  // namespace hearthfront::server
