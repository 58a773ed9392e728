#include "server/live/push_line.h"

#include <cmath>

#include "server/base/log.h"
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

std::optional<std::string> zone_at(const Furnace& line, int position) {
  int last = 0;
  for (const Chamber& zone : line.chambers) {
    last += zone.places;
    if (position <= last) return zone.id;
  }
  return std::nullopt;
}

namespace {

int first_position(const Furnace& line, const std::string& zone) {
  int first = 1;
  for (const Chamber& each : line.chambers) {
    if (each.id == zone) return first;
    first += each.places;
  }
  return 1;
}

// A load that came into a zone, or was put there by hand, is at that zone's first position and goes on from
// there. `pushes`: those after it came, ascending.
int position_at(const LoadDefinition& load, const Furnace& line, std::int64_t came_us,
                const std::vector<storage::PushRow>& pushes, std::int64_t at_us) {
  int position = 0;
  auto push = pushes.begin();
  for (const PathStep& step : load.path) {
    if (step.from_us < came_us) continue;
    if (step.from_us > at_us || step.furnace != line.id) break;
    for (; push != pushes.end() && push->at_us <= step.from_us; ++push) ++position;
    if (position == 0 || zone_at(line, position) != step.chamber)
      position = first_position(line, step.chamber);
  }
  for (; push != pushes.end() && push->at_us <= at_us; ++push) ++position;
  return position;
}

}  // namespace

std::optional<int> line_position(const LoadDefinition& load, storage::Reader& reader, std::int64_t at_us) {
  const PathStep& place = load.place_at(at_us);
  const auto came = came_us(load, at_us);
  if (!came || !load.furnace(place.furnace)->line) return std::nullopt;
  return position_at(load, *load.furnace(place.furnace), *came,
                     reader.pushes(place.furnace, *came + 1, at_us), at_us);
}

bool follow_line(LoadDefinition& load, storage::Reader& reader, std::int64_t until_us) {
  const PathStep place = load.last_place();
  const Furnace* line = load.furnace(place.furnace);
  if (!line || !line->line) return false;
  const std::int64_t came = came_us(load, place.from_us).value();
  const auto pushes = reader.pushes(place.furnace, came + 1, until_us);
  int position = position_at(load, *line, came, pushes, place.from_us);
  bool moved = false;
  for (const storage::PushRow& push : pushes) {
    if (push.at_us <= place.from_us) continue;
    if (load.ended_us && push.at_us >= *load.ended_us) break;
    const auto zone = zone_at(*line, ++position);
    if (zone == load.last_place().chamber) continue;
    moved = true;
    if (!zone) {
      load.end_at(push.at_us);
      break;
    }
    load.path.push_back({push.at_us, line->id, *zone});
  }
  return moved;
}

storage::LineSeen line_seen(const std::string& furnace, storage::Reader& reader) {
  storage::LineSeen seen{furnace, std::nullopt, std::nullopt};
  if (const auto last = reader.last_push(furnace, "")) seen.last_push_us = last->at_us;
  return seen;
}

namespace {

std::vector<MovedLoad> push_once(const Furnace& line, storage::Store& store, storage::Reader& reader,
                                 const storage::PushRow& push, std::int64_t now_us) {
  const auto refuse = [](const std::string& text) {
    throw storage::StorageError(storage::StorageFault::misuse, text);
  };
  // Looked at before the loads are: whatever changes from here on, the store tells.
  storage::LineSeen seen = line_seen(line.id, reader);
  seen.loads = reader.loads_on(line.id);
  if (seen.last_push_us && *seen.last_push_us >= push.at_us)
    refuse(line.name + " was pushed at " + format_time(*seen.last_push_us) +
           " already; a push is entered in the order in which it happened.");
  std::vector<storage::LoadChange> changes;
  std::vector<storage::AuditRow> audits;
  std::vector<MovedLoad> moved;
  for (const storage::LoadOn& on : *seen.loads) {
    const auto row = reader.load(on.load);
    if (!row || row->started_us >= push.at_us) continue;
    LoadDefinition load;
    try {
      load = read_stored_definition(row->definition_json);
    } catch (const std::exception& error) {
      // It cannot be run either; the others must not stand still for it.
      log_error("a load cannot be moved", {{"load", on.load}, {"what", error.what()}});
      continue;
    }
    const PathStep place = load.last_place();
    // Its own copy of the line: what the plant file says now may name other zones.
    const Furnace* copy = load.furnace(line.id);
    if (place.furnace != line.id || !copy || !copy->line) continue;
    const std::int64_t came = came_us(load, place.from_us).value();
    if (came >= push.at_us) continue;
    if (place.from_us >= push.at_us)
      refuse("Load " + load.name + " moved at " + format_time(place.from_us) + ", after this push at " +
             format_time(push.at_us) + ". Correct its path, or the time of the push.");
    const int position =
        position_at(load, *copy, came, reader.pushes(line.id, came + 1, push.at_us), push.at_us);
    const auto zone = zone_at(*copy, position + 1);
    if (zone == place.chamber) continue;
    if (zone)
      load.path.push_back({push.at_us, line.id, *zone});
    else
      load.end_at(push.at_us);
    changes.push_back({on.revision, row_of(load), stays_of(load)});
    changes.back().row.id = on.load;
    audits.push_back({now_us, push.person, zone ? "push to " + *zone : "push off the line", "", "",
                      "{\"at\":\"" + format_time(push.at_us) + "\"}"});
    moved.push_back({on.load, load.name, place.chamber, zone});
  }
  store.revise_loads(std::move(changes), std::move(audits), push, std::move(seen));
  return moved;
}

}  // namespace

std::vector<MovedLoad> push_line(const Furnace& line, storage::Store& store, storage::Reader& reader,
                                 const storage::PushRow& push, std::int64_t now_us) {
  // A tray that is put on the line, moved or ended in this very moment is looked at again.
  for (int left = 3;; --left) {
    try {
      return push_once(line, store, reader, push, now_us);
    } catch (const storage::StorageError& error) {
      if (error.fault != storage::StorageFault::misuse || left == 1) throw;
    }
  }
}

bool is_echo(const std::optional<storage::PushRow>& last, std::int64_t at_us) {
  constexpr std::int64_t soon_us = 180'000'000;
  return last && last->source == "person" && at_us - last->at_us <= soon_us;
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
