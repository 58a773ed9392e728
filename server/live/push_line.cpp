#include "server/live/push_line.h"

#include <cmath>

#include "server/base/time_text.h"
#include "server/live/definition_json.h"

namespace hearthfront::server {

std::vector<storage::Stay> stays_of(const LoadDefinition& load) {
  std::vector<storage::Stay> stays;
  for (std::size_t i = 0; i < load.path.size(); ++i) {
    const PathStep& step = load.path[i];
    if (step.outside()) continue;
    const Chamber* chamber = load.furnace(step.furnace)->chamber(step.chamber);
    stays.push_back(
        {step.furnace, step.chamber, step.from_us, load.until_us(i), chamber ? chamber->places : 1});
  }
  return stays;
}

storage::LoadRow row_of(const LoadDefinition& load) {
  storage::LoadRow row;
  row.name = load.name;
  row.furnace = load.last_furnace_place().furnace;
  row.chamber = load.last_furnace_place().chamber;
  row.person = load.person;
  row.started_us = load.started_us;
  row.ended_us = load.ended_us;
  row.definition_json = stored_definition(load);
  return row;
}

std::optional<std::int64_t> came_us(const LoadDefinition& load, std::int64_t at_us) {
  std::optional<std::int64_t> came;
  std::string furnace;
  for (const PathStep& step : load.path) {
    if (step.from_us > at_us) break;
    if (step.furnace != furnace) came = step.from_us;
    furnace = step.furnace;
  }
  return furnace.empty() ? std::nullopt : came;
}

std::optional<int> line_position(const LoadDefinition& load, storage::Reader& reader, std::int64_t at_us) {
  const PathStep& place = load.place_at(at_us);
  const auto came = came_us(load, at_us);
  if (!came || !load.furnace(place.furnace)->line) return std::nullopt;
  return 1 + static_cast<int>(reader.pushes(place.furnace, *came + 1, at_us).size());
}

std::optional<std::string> zone_at(const Furnace& line, int position) {
  int last = 0;
  for (const Chamber& zone : line.chambers) {
    last += zone.places;
    if (position <= last) return zone.id;
  }
  return std::nullopt;
}

bool follow_line(LoadDefinition& load, storage::Reader& reader, std::int64_t until_us) {
  const PathStep place = load.last_place();
  const Furnace* line = load.furnace(place.furnace);
  if (!line || !line->line) return false;
  bool moved = false;
  int position = 1;
  for (const storage::PushRow& push :
       reader.pushes(place.furnace, *came_us(load, place.from_us) + 1, until_us)) {
    if (load.ended_us && push.at_us >= *load.ended_us) break;
    const auto zone = zone_at(*line, ++position);
    if (push.at_us <= load.last_place().from_us || zone == load.last_place().chamber) continue;
    moved = true;
    if (!zone) {
      load.ended_us = push.at_us;
      break;
    }
    load.path.push_back({push.at_us, line->id, *zone});
  }
  return moved;
}

std::vector<MovedLoad> push_line(const Furnace& line, storage::Store& store, storage::Reader& reader,
                                 const storage::PushRow& push, std::int64_t now_us) {
  const auto refuse = [](const std::string& text) {
    throw storage::StorageError(storage::StorageFault::misuse, text);
  };
  if (const auto last = reader.last_push(line.id, ""); last && last->at_us >= push.at_us)
    refuse(line.name + " was pushed at " + format_time(last->at_us) +
           " already; a push is entered in the order in which it happened.");
  std::vector<storage::LoadChange> changes;
  std::vector<storage::AuditRow> audits;
  std::vector<MovedLoad> moved;
  for (const storage::LoadRow& row : reader.open_loads()) {
    if (row.furnace != line.id) continue;
    LoadDefinition load = read_stored_definition(row.definition_json);
    const PathStep place = load.last_place();
    if (place.furnace != line.id || load.started_us >= push.at_us) continue;
    const auto came = came_us(load, place.from_us);
    if (*came >= push.at_us) continue;
    if (place.from_us >= push.at_us)
      refuse("Load " + load.name + " moved at " + format_time(place.from_us) + ", after this push at " +
             format_time(push.at_us) + ". Correct its path, or the time of the push.");
    const int position = 1 + static_cast<int>(reader.pushes(line.id, *came + 1, push.at_us).size());
    const auto zone = zone_at(line, position + 1);
    if (zone == place.chamber) continue;
    if (zone)
      load.path.push_back({push.at_us, line.id, *zone});
    else
      load.ended_us = push.at_us;
    changes.push_back({row.revision, row_of(load), stays_of(load)});
    changes.back().row.id = row.id;
    audits.push_back({now_us, push.person, zone ? "push to " + *zone : "push off the line", "", "",
                      "{\"at\":\"" + format_time(push.at_us) + "\"}"});
    moved.push_back({row.id, row.name, place.chamber, zone});
  }
  store.revise_loads(std::move(changes), std::move(audits), push);
  return moved;
}

std::vector<std::int64_t> rises(const std::vector<storage::Reading>& samples,
                                std::optional<storage::Reading> before) {
  constexpr double most_at_once = 50;
  std::vector<std::int64_t> times;
  for (const storage::Reading& sample : samples) {
    if (before && sample.value > before->value) {
      const double step = sample.value - before->value;
      const bool counter = step == std::floor(step) && step <= most_at_once;
      const auto pushes = counter ? static_cast<std::int64_t>(step) : 1;
      for (std::int64_t i = 1; i <= pushes; ++i)
        times.push_back(before->time_us + (sample.time_us - before->time_us) * i / pushes);
    }
    before = sample;
  }
  return times;
}

}  // namespace hearthfront::server
