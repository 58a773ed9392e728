// The furnace and the mapping that CSV tests start from.
#pragma once

#include <string>

#include "server/base/number_text.h"
#include "server/base/plant.h"
#include "server/base/time_text.h"
#include "server/ingest/csv.h"

namespace hearthfront::test {

inline server::Furnace furnace() {
  using namespace server;
  Furnace pit;
  pit.id = "pit-2";
  pit.name = "Pit 2";
  pit.chambers = {{"main", "Main"}};
  pit.channels = {
      {"temperature", Role::temperature, Unit::degc, "main", 0, 1100, 60, 300, 600},
      {"carbon-potential", Role::carbon_potential, Unit::weight_percent, "main", 0, 2, 60, 300, 600}};
  return pit;
}

inline server::CsvMapping mapping() {
  server::CsvMapping plain;
  plain.name = "logger";
  plain.time_column = "Time";
  plain.columns = {{"TC1", "temperature", {}}, {"CP", "carbon-potential", {}}};
  return plain;
}

// Each item as "line channel time value" or "line channel reason: detail"; or the problem's detail.
inline std::string decoded(const std::string& text, const server::CsvMapping& mapping) {
  using namespace server;
  const DecodedCsv csv = decode_csv(text, furnace(), mapping);
  if (csv.problem)
    return std::to_string(csv.problem->status) + " " + csv.problem->type + ": " + csv.problem->detail;
  std::string all;
  for (const RawReading& item : csv.items) {
    all += std::to_string(item.line) + " " + item.channel + " ";
    if (item.refusal == Refusal::none) {
      all += format_time(item.time_us) + " " + number_text(item.value) + "\n";
    } else {
      all += std::string(server::text(item.refusal)) + ": " + item.detail + "\n";
    }
  }
  return all;
}

}  // namespace hearthfront::test
