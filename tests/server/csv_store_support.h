// A furnace with one channel of each kind that logger files feed, and a real store behind it.
#pragma once

#include <optional>
#include <string>

#include "server/base/number_text.h"
#include "server/base/time_text.h"
#include "server/ingest/accept.h"
#include "server/ingest/csv_mapping_json.h"
#include "server/settings_support.h"
#include "storage/store.h"

namespace hearthfront::test {

inline server::Plant plant_with_all_channels() {
  using namespace server;
  Furnace pit;
  pit.id = "pit-1";
  pit.name = "Pit 1";
  pit.chambers = {{"main", "Main"}};
  pit.channels = {
      {"temperature", Role::temperature, Unit::degc, "main", 0, 1100, 60, 300, 600},
      {"carbon-potential", Role::carbon_potential, Unit::weight_percent, "main", 0, 2, 60, 300, 600},
      {"probe-emf", Role::probe_emf, Unit::millivolt, "main", -50, 1400, 60, 300, 600},
      {"co", Role::co, Unit::volume_percent, "main", 0, 50, 60, 300, 600}};
  Plant plant;
  plant.furnaces = {pit};
  return plant;
}

// 2026-12-01T12:00:00Z: the nights of 2026 in which clocks change lie behind it.
class DecemberClock final : public server::Clock {
 public:
  std::int64_t now_us() const override { return 1'796'126'400'000'000; }
  double speed() const override { return 1; }
};

struct LogStore {
  LogStore() { acceptor.emplace(plant, clock, store, limits); }

  const server::Furnace& furnace() const { return plant.furnaces[0]; }
  server::CsvMapping mapping(const std::string& json) const {
    return server::read_csv_mapping_json(json, furnace(), "dialect");
  }
  server::CsvReport upload(const std::string& file, const server::CsvMapping& by) const {
    return server::accept_csv(*acceptor, file, furnace(), by);
  }
  // All that is stored, one "channel time value" a line, by channel and time.
  std::string stored() const {
    storage::Reader reader(store.path());
    std::string all;
    for (const server::Channel& channel : furnace().channels) {
      const auto id = acceptor->channel_id(furnace().id, channel.name).value();
      for (const auto& each : reader.accepted(id, server::earliest_time_us, server::latest_time_us))
        all += channel.name + " " + server::format_time(each.time_us) + " " +
               server::number_text(each.value) + "\n";
    }
    return all;
  }
  // Nothing at all was written, refused readings included.
  bool untouched() const {
    storage::Reader reader(store.path());
    return stored().empty() && reader.refused_counts("").empty() && store.counters().readings_stored == 0;
  }

  ScratchFolder folder;
  server::Plant plant = plant_with_all_channels();
  DecemberClock clock;
  server::Settings::Ingest limits;
  storage::Store store{storage::StoreOptions{folder.path("a.db"), 50'000, true}};
  std::optional<server::Acceptor> acceptor;
};

// Latin letters and what else fits into one UTF-16 unit.
inline std::string utf16(const std::u16string& text, bool little, bool mark = true) {
  std::string bytes;
  const auto add = [&](char16_t unit) {
    const char low = static_cast<char>(unit & 0xffu), high = static_cast<char>(unit >> 8u);
    bytes += little ? low : high;
    bytes += little ? high : low;
  };
  if (mark) add(u'\ufeff');
  for (const char16_t unit : text) add(unit);
  return bytes;
}

}  // namespace hearthfront::test
