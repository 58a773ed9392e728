#include "storage/stays.h"

#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Statement.h>

#include <algorithm>
#include <array>
#include <ctime>

#include "storage/connection.h"
#include "storage/rows.h"

namespace hearthfront::storage {
namespace {

struct Neighbour {
  std::int64_t load, from_us;
  std::optional<std::int64_t> to_us;
  std::string name;

  bool covers(std::int64_t time_us) const { return from_us <= time_us && (!to_us || *to_us > time_us); }
};

std::vector<Neighbour> neighbours(Connection& connection, std::int64_t load, const Stay& stay) {
  auto& query = connection.statement(
      "SELECT s.load, s.from_us, s.to_us, l.name FROM load_stay s JOIN load l ON l.id = s.load "
      "WHERE s.furnace = ?1 AND s.chamber = ?2 AND s.load <> ?3 AND (?5 IS NULL OR s.from_us < ?5) "
      "AND coalesce(s.to_us, 9223372036854775807) > ?4 ORDER BY s.from_us");
  query.bind(1, stay.furnace);
  query.bind(2, stay.chamber);
  query.bind(3, load);
  query.bind(4, stay.from_us);
  bind_optional(query, 5, stay.to_us);
  std::vector<Neighbour> rows;
  while (query.executeStep())
    rows.push_back({query.getColumn(0).getInt64(), query.getColumn(1).getInt64(), optional_column(query, 2),
                    query.getColumn(3).getString()});
  query.tryReset();
  return rows;
}

void refuse_crowding(Connection& connection, const LoadRow& load, const Stay& stay) {
  const auto others = neighbours(connection, load.id, stay);
  // The number present changes only where somebody comes, so those moments are enough to look at.
  std::vector<std::int64_t> moments{stay.from_us};
  for (const Neighbour& other : others) moments.push_back(std::max(other.from_us, stay.from_us));
  for (const std::int64_t moment : moments) {
    const auto present =
        std::count_if(others.begin(), others.end(), [&](const Neighbour& n) { return n.covers(moment); });
    if (present < stay.places) continue;
    const auto other =
        std::find_if(others.begin(), others.end(), [&](const Neighbour& n) { return n.covers(moment); });
    const std::string room =
        stay.places == 1 ? "" : ", which has " + std::to_string(stay.places) + " places, all taken";
    throw StorageError(StorageFault::misuse,
                       "Load " + other->name + " (number " + std::to_string(other->load) +
                           ") is in chamber " + stay.chamber + " of " + stay.furnace + " from " +
                           utc_text(other->from_us) +
                           (other->to_us ? " to " + utc_text(*other->to_us) : ", still without an end") +
                           room + ". Load " + load.name +
                           " would be there at the same time. End or move that load first, or correct the "
                           "times or the chamber.");
  }
}

}  // namespace

std::string utc_text(std::int64_t time_us) {
  constexpr std::int64_t second_us = 1'000'000;
  // Round down also before 1970.
  const std::time_t seconds = time_us / second_us - (time_us % second_us < 0 ? 1 : 0);
  std::tm parts{};
  std::array<char, 40> text{};
  if (::gmtime_r(&seconds, &parts) == nullptr ||
      std::strftime(text.data(), text.size(), "%Y-%m-%dT%H:%M:%SZ", &parts) == 0) {
    return std::to_string(time_us) + " us";
  }
  return text.data();
}

std::vector<Stay> stays_of(Connection& connection, std::int64_t load) {
  auto& query =
      connection.statement("SELECT " HF_STAY_COLUMNS " FROM load_stay WHERE load = ? ORDER BY from_us");
  query.bind(1, load);
  std::vector<Stay> rows;
  while (query.executeStep()) rows.push_back(stay_from(query));
  query.tryReset();
  return rows;
}

void remove_stays(Connection& connection, std::int64_t load) {
  auto& remove = connection.statement("DELETE FROM load_stay WHERE load = ?");
  remove.bind(1, load);
  remove.exec();
}

void insert_stays(Connection& connection, const LoadRow& load, const std::vector<Stay>& stays) {
  for (const Stay& stay : stays) {
    if (stay.to_us && *stay.to_us <= stay.from_us)
      throw StorageError(StorageFault::misuse, "Load " + load.name + " would leave chamber " + stay.chamber +
                                                   " at " + utc_text(*stay.to_us) +
                                                   ", not after it came at " + utc_text(stay.from_us) +
                                                   ". Correct one of the two times.");
    refuse_crowding(connection, load, stay);
    auto& insert = connection.statement(
        "INSERT INTO load_stay(load, furnace, chamber, from_us, to_us, places) VALUES(?, ?, ?, ?, ?, ?)");
    insert.bind(1, load.id);
    insert.bind(2, stay.furnace);
    insert.bind(3, stay.chamber);
    insert.bind(4, stay.from_us);
    bind_optional(insert, 5, stay.to_us);
    insert.bind(6, stay.places);
    insert.exec();
  }
}

void insert_push(Connection& connection, const PushRow& push) {
  auto& insert = connection.statement(
      "INSERT INTO push(furnace, at_us, person, source) VALUES(?, ?, ?, ?) ON CONFLICT DO NOTHING");
  insert.bind(1, push.furnace);
  insert.bind(2, push.at_us);
  insert.bind(3, push.person);
  insert.bind(4, push.source);
  if (insert.exec() == 1) return;
  throw StorageError(StorageFault::misuse, "Furnace " + push.furnace + " was already pushed at " +
                                               utc_text(push.at_us) + ". Nothing was moved a second time.");
}

void refuse_unseen(Connection& connection, const LineSeen& seen) {
  auto& last = connection.statement("SELECT max(at_us) FROM push WHERE furnace = ?");
  last.bind(1, seen.furnace);
  last.executeStep();
  const auto pushed_us = optional_column(last, 0);
  last.tryReset();
  if (pushed_us != seen.last_push_us)
    throw StorageError(StorageFault::misuse, "Furnace " + seen.furnace +
                                                 " was pushed at this very moment. Nothing was changed; look "
                                                 "where the trays are now, then repeat it.");
  if (!seen.loads) return;
  auto& query = connection.statement(HF_LOADS_ON_FURNACE);
  query.bind(1, seen.furnace);
  const auto present = loads_on_from(query);
  query.tryReset();
  if (present != *seen.loads)
    throw StorageError(StorageFault::misuse, "A load of furnace " + seen.furnace +
                                                 " was changed at this very moment. Nothing was moved; look "
                                                 "where the trays are now, then repeat it.");
}

}  // namespace hearthfront::storage
