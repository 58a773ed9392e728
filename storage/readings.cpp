#include "storage/readings.h"

#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Statement.h>

#include <algorithm>
#include <limits>
#include <string_view>
#include <utility>

#include "storage/connection.h"

namespace hearthfront::storage {
namespace {

constexpr std::size_t kept_text_bytes = 200;
constexpr std::int64_t kept_refused_rows = 20'000;
// Names of unknown channels come from outside: without a bound a mad sender could fill the disk with them.
constexpr std::int64_t separately_counted = 2'000;
const std::string other_names = "(other)";

std::string cut(std::string_view text) {
  if (text.size() <= kept_text_bytes) return std::string(text);
  std::size_t end = kept_text_bytes;
  // A byte 10xxxxxx continues a UTF-8 character: step back to that character's start.
  while (end > kept_text_bytes - 4 && (static_cast<unsigned char>(text[end]) & 0xC0U) == 0x80U) --end;
  return std::string(text.substr(0, end));
}

}  // namespace

void widen(std::map<std::int64_t, ChangedSpan>& spans, const ChangedSpan& more) {
  const auto [place, added] = spans.try_emplace(more.channel, more);
  if (added) return;
  place->second.from_us = std::min(place->second.from_us, more.from_us);
  place->second.to_us = std::max(place->second.to_us, more.to_us);
}

std::vector<Taken> ReadingTable::append(const std::vector<Reading>& readings) {
  std::vector<Taken> taken;
  taken.reserve(readings.size());
  for (const Reading& reading : readings) taken.push_back(append_one(reading));
  return taken;
}

Taken ReadingTable::append_one(const Reading& reading) {
  auto& insert = connection_.statement(
      "INSERT INTO reading(channel, time_us, value) VALUES(?, ?, ?) ON CONFLICT DO NOTHING");
  insert.bind(1, reading.channel);
  insert.bind(2, reading.time_us);
  insert.bind(3, reading.value == 0 ? 0.0 : reading.value);  // one zero, so that -0.0 is no second value
  if (insert.exec() == 0) {
    ++effects_.duplicate;
    return Taken::duplicate;
  }
  ++effects_.stored;
  Tally& tally = tallies_[reading.channel];
  ++tally.stored;
  widen(effects_.changes, {reading.channel, reading.time_us, reading.time_us});
  std::int64_t& newest = newest_time(reading.channel);
  if (reading.time_us > newest) {
    newest = reading.time_us;
    return Taken::stored;
  }
  const std::int64_t values = values_at(reading);
  if (values < 2) return Taken::stored;
  if (values == 2) ++tally.conflicts;  // the time, not the value, is what conflicts
  ++effects_.conflict;
  return Taken::conflict;
}

std::int64_t ReadingTable::values_at(const Reading& reading) {
  auto& query = connection_.statement("SELECT count(*) FROM reading WHERE channel = ? AND time_us = ?");
  query.bind(1, reading.channel);
  query.bind(2, reading.time_us);
  query.executeStep();
  const std::int64_t values = query.getColumn(0).getInt64();
  query.tryReset();
  return values;
}

// On a first look the row just inserted is already there, so that the caller goes on to count values.
std::int64_t& ReadingTable::newest_time(std::int64_t channel) {
  const auto [place, added] = newest_us_.try_emplace(channel, std::numeric_limits<std::int64_t>::max());
  if (added) {
    auto& query = connection_.statement("SELECT max(time_us) FROM reading WHERE channel = ?");
    query.bind(1, channel);
    query.executeStep();
    place->second = query.getColumn(0).getInt64();
    query.tryReset();
  }
  return place->second;
}

void ReadingTable::refuse(const std::vector<RefusedReading>& refused) {
  for (const RefusedReading& one : refused) {
    auto& insert = connection_.statement(
        "INSERT INTO refused_reading(received_us, furnace, channel, time_text, value_text, reason) "
        "VALUES(?, ?, ?, ?, ?, ?)");
    insert.bind(1, one.received_us);
    insert.bind(2, cut(one.furnace));
    insert.bind(3, cut(one.channel));
    insert.bind(4, cut(one.time_text));
    insert.bind(5, cut(one.value_text));
    insert.bind(6, cut(one.reason));
    insert.exec();
    count_refusal(one);
    refused_any_ = true;
  }
}

void ReadingTable::count_refusal(const RefusedReading& refused) {
  const std::string furnace = cut(refused.furnace), channel = cut(refused.channel),
                    reason = cut(refused.reason);
  if (add_to_count(furnace, channel, reason)) return;
  const bool by_name = may_name(furnace, channel);
  auto& insert = connection_.statement(
      "INSERT INTO refused_count(furnace, channel, reason, count) VALUES(?, ?, ?, 1) "
      "ON CONFLICT DO UPDATE SET count = count + 1");
  insert.bind(1, by_name ? furnace : other_names);
  insert.bind(2, by_name ? channel : other_names);
  insert.bind(3, reason);
  insert.exec();
}

bool ReadingTable::add_to_count(const std::string& furnace, const std::string& channel,
                                const std::string& reason) {
  auto& update = connection_.statement(
      "UPDATE refused_count SET count = count + 1 WHERE furnace = ? AND channel = ? AND reason = ?");
  update.bind(1, furnace);
  update.bind(2, channel);
  update.bind(3, reason);
  return update.exec() == 1;
}

bool ReadingTable::may_name(const std::string& furnace, const std::string& channel) {
  auto& query = connection_.statement(
      "SELECT EXISTS(SELECT 1 FROM channel WHERE furnace = ? AND name = ?) "
      "OR (SELECT count(*) FROM refused_count) < ?");
  query.bind(1, furnace);
  query.bind(2, channel);
  query.bind(3, separately_counted);
  query.executeStep();
  const bool allowed = query.getColumn(0).getInt() != 0;
  query.tryReset();
  return allowed;
}

void ReadingTable::finish() {
  for (const auto& [channel, tally] : tallies_) {
    auto& update = connection_.statement(
        "UPDATE channel SET stored = stored + ?, conflicts = conflicts + ? WHERE id = ?");
    update.bind(1, tally.stored);
    update.bind(2, tally.conflicts);
    update.bind(3, channel);
    update.exec();
  }
  if (refused_any_) {
    auto& trim = connection_.statement(
        "DELETE FROM refused_reading WHERE id <= (SELECT max(id) FROM refused_reading) - ?");
    trim.bind(1, kept_refused_rows);
    trim.exec();
  }
}

ReadingEffects ReadingTable::committed() {
  tallies_.clear();
  refused_any_ = false;
  return std::exchange(effects_, {});
}

void ReadingTable::rolled_back() noexcept {
  tallies_.clear();
  refused_any_ = false;
  effects_ = {};
  newest_us_.clear();
}

}  // namespace hearthfront::storage
