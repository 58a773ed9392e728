// The read side of the front door, part one: readings, their counts, and what was refused.
#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Exception.h>
#include <SQLiteCpp/Statement.h>

#include <limits>

#include "storage/reader_impl.h"
#include "storage/schema.h"

namespace hearthfront::storage {
namespace {

Reading reading_from(SQLite::Statement& query, std::int64_t channel) {
  return {
      .channel = channel, .time_us = query.getColumn(0).getInt64(), .value = query.getColumn(1).getDouble()};
}

}  // namespace

void check_limit(int limit) {
  if (limit >= 1) return;
  throw StorageError(StorageFault::misuse,
                     "A page of " + std::to_string(limit) + " rows was asked for; ask for 1 or more.");
}

Reader::Impl::Impl(const std::string& path)
    : connection_(canonical_path(path), Connection::Role::reader), files_(connection_.path()) {
  read("read the tables", [&] {
    if (schema_version(connection_) == migrations().back().version) return;
    throw StorageError(StorageFault::misuse, "The database " + connection_.path() +
                                                 " has no tables or those of an older version. Start the "
                                                 "daemon on it once; it brings them up to date.");
  });
}

void Reader::Impl::rethrow(std::string_view doing) {
  try {
    throw;
  } catch (const SQLite::Exception& error) {
    throw explain(error, connection_.path(), doing);
  }
}

Reader::Impl::Ending::~Ending() {
  connection_.reset_statements();
  try {
    if (connection_.in_transaction()) connection_.run("ROLLBACK");
  } catch (const SQLite::Exception&) {
    // A reader has nothing to lose; the next BEGIN reports a connection that is of no use.
  }
}

Reader::Reader(const std::string& path) : impl_(std::make_unique<Impl>(path)) {}
Reader::~Reader() = default;

std::vector<Reading> Reader::accepted(std::int64_t channel, std::int64_t from_us, std::int64_t to_us) {
  return impl_->read("read readings", [&] {
    auto& query = impl_->statement(
        "SELECT time_us, value FROM reading WHERE channel = ? AND time_us BETWEEN ? AND ? ORDER BY time_us");
    query.bind(1, channel);
    query.bind(2, from_us);
    query.bind(3, to_us);
    const auto chosen = impl_->choices(channel, from_us, to_us);
    std::vector<Reading> rows;
    std::optional<std::int64_t> conflict_us;
    while (query.executeStep()) {
      const Reading row = reading_from(query, channel);
      if (conflict_us == row.time_us) continue;
      if (rows.empty() || rows.back().time_us != row.time_us) {
        rows.push_back(row);
        continue;
      }
      conflict_us = row.time_us;
      const auto choice = chosen.find(row.time_us);
      if (choice != chosen.end() && choice->second.value)
        rows.back().value = *choice->second.value;
      else
        rows.pop_back();
    }
    return rows;
  });
}

std::map<std::int64_t, Choice> Reader::Impl::choices(std::int64_t channel, std::int64_t from_us,
                                                     std::int64_t to_us) {
  auto& query = statement(
      "SELECT time_us, value, at_us, person FROM choice WHERE channel = ? AND time_us BETWEEN ? AND ?");
  query.bind(1, channel);
  query.bind(2, from_us);
  query.bind(3, to_us);
  std::map<std::int64_t, Choice> rows;
  while (query.executeStep()) {
    Choice choice{.channel = channel,
                  .time_us = query.getColumn(0).getInt64(),
                  .value = std::nullopt,
                  .at_us = query.getColumn(2).getInt64(),
                  .person = query.getColumn(3).getString()};
    if (!query.getColumn(1).isNull()) choice.value = query.getColumn(1).getDouble();
    rows.emplace(choice.time_us, std::move(choice));
  }
  return rows;
}

std::optional<Reading> Reader::Impl::newest(std::int64_t channel, std::int64_t at_us) {
  auto& query = statement(
      "SELECT time_us, value FROM reading WHERE channel = ? AND time_us <= ? ORDER BY time_us DESC");
  query.bind(1, channel);
  query.bind(2, at_us);
  std::optional<Reading> candidate;
  bool alone = true;
  const auto settled = [&]() -> std::optional<Reading> {
    if (alone) return candidate;
    const auto chosen = choices(channel, candidate->time_us, candidate->time_us);
    const auto choice = chosen.find(candidate->time_us);
    if (choice == chosen.end() || !choice->second.value) return std::nullopt;
    return Reading{channel, candidate->time_us, *choice->second.value};
  };
  while (query.executeStep()) {
    const Reading row = reading_from(query, channel);
    if (candidate && candidate->time_us == row.time_us) {
      alone = false;
      continue;
    }
    if (candidate)
      if (const auto found = settled()) return found;
    candidate = row;
    alone = true;
  }
  return candidate ? settled() : std::nullopt;
}

std::optional<Reading> Reader::newest(std::int64_t channel, std::int64_t at_us) {
  return impl_->read("read the newest reading", [&] { return impl_->newest(channel, at_us); });
}

ChannelCounts Reader::counts(std::int64_t channel) {
  return impl_->read("read the counts of a channel", [&] {
    ChannelCounts counts;
    auto& totals = impl_->statement("SELECT stored, conflicts FROM channel WHERE id = ?");
    totals.bind(1, channel);
    if (totals.executeStep()) {
      counts.stored = totals.getColumn(0).getInt64();
      counts.conflicts = totals.getColumn(1).getInt64();
    }
    auto& chosen = impl_->statement("SELECT count(*) FROM choice WHERE channel = ?");
    chosen.bind(1, channel);
    if (chosen.executeStep()) counts.chosen = chosen.getColumn(0).getInt64();
    auto& refused = impl_->statement(
        "SELECT r.reason, r.count FROM channel c JOIN refused_count r ON r.furnace = c.furnace "
        "AND r.channel = c.name WHERE c.id = ?");
    refused.bind(1, channel);
    while (refused.executeStep()) {
      counts.refused[refused.getColumn(0).getString()] = refused.getColumn(1).getInt64();
    }
    counts.last = impl_->newest(channel, std::numeric_limits<std::int64_t>::max());
    return counts;
  });
}

std::vector<RefusedReading> Reader::refused(std::string_view furnace, int limit) {
  check_limit(limit);
  return impl_->read("read refused readings", [&] {
    auto& query = impl_->statement(
        "SELECT received_us, furnace, channel, time_text, value_text, reason FROM refused_reading "
        "WHERE ?1 = '' OR furnace = ?1 ORDER BY id DESC LIMIT ?2");
    query.bind(1, std::string(furnace));
    query.bind(2, limit);
    std::vector<RefusedReading> rows;
    while (query.executeStep()) {
      rows.push_back({.received_us = query.getColumn(0).getInt64(),
                      .furnace = query.getColumn(1).getString(),
                      .channel = query.getColumn(2).getString(),
                      .time_text = query.getColumn(3).getString(),
                      .value_text = query.getColumn(4).getString(),
                      .reason = query.getColumn(5).getString()});
    }
    return rows;
  });
}

std::vector<RefusedCount> Reader::refused_counts(std::string_view furnace) {
  return impl_->read("read the counts of refused readings", [&] {
    auto& query = impl_->statement(
        "SELECT furnace, channel, reason, count FROM refused_count WHERE ?1 = '' OR furnace = ?1 "
        "ORDER BY furnace, channel, reason");
    query.bind(1, std::string(furnace));
    std::vector<RefusedCount> rows;
    while (query.executeStep()) {
      rows.push_back({.furnace = query.getColumn(0).getString(),
                      .channel = query.getColumn(1).getString(),
                      .reason = query.getColumn(2).getString(),
                      .count = query.getColumn(3).getInt64()});
    }
    return rows;
  });
}

}  // namespace hearthfront::storage
