// The read side of the front door, part three: where loads are, and what people decided: library, choices,
// masks.
#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Statement.h>

#include <algorithm>

#include "storage/reader_impl.h"
#include "storage/rows.h"

namespace hearthfront::storage {
namespace {

#define HF_LIBRARY_COLUMNS "kind, key, version, at_us, person, name, json, retired"

LibraryRow library_from(SQLite::Statement& query) {
  return {.kind = query.getColumn(0).getString(),
          .key = query.getColumn(1).getString(),
          .version = query.getColumn(2).getInt64(),
          .at_us = query.getColumn(3).getInt64(),
          .person = query.getColumn(4).getString(),
          .name = query.getColumn(5).getString(),
          .json = query.getColumn(6).getString(),
          .retired = query.getColumn(7).getInt() != 0};
}

PushRow push_from(SQLite::Statement& query) {
  return {.furnace = query.getColumn(0).getString(),
          .at_us = query.getColumn(1).getInt64(),
          .person = query.getColumn(2).getString(),
          .source = query.getColumn(3).getString()};
}

}  // namespace

std::vector<Stay> Reader::stays(std::int64_t load) {
  return impl_->read("read where a load was", [&] {
    auto& query =
        impl_->statement("SELECT " HF_STAY_COLUMNS " FROM load_stay WHERE load = ? ORDER BY from_us");
    query.bind(1, load);
    std::vector<Stay> rows;
    while (query.executeStep()) rows.push_back(stay_from(query));
    return rows;
  });
}

std::vector<LoadOn> Reader::loads_on(std::string_view furnace) {
  return impl_->read("read who is on a furnace", [&] {
    auto& query = impl_->statement(HF_LOADS_ON_FURNACE);
    query.bind(1, std::string(furnace));
    return loads_on_from(query);
  });
}

std::vector<PushRow> Reader::pushes(std::string_view furnace, std::int64_t from_us, std::int64_t to_us) {
  return impl_->read("read the pushes of a furnace", [&] {
    auto& query = impl_->statement(
        "SELECT furnace, at_us, person, source FROM push WHERE furnace = ? AND at_us BETWEEN ? AND ? "
        "ORDER BY at_us");
    query.bind(1, std::string(furnace));
    query.bind(2, from_us);
    query.bind(3, to_us);
    std::vector<PushRow> rows;
    while (query.executeStep()) rows.push_back(push_from(query));
    return rows;
  });
}

std::optional<PushRow> Reader::last_push(std::string_view furnace, std::string_view source) {
  return impl_->read("read the last push of a furnace", [&]() -> std::optional<PushRow> {
    auto& query = impl_->statement(
        "SELECT furnace, at_us, person, source FROM push WHERE furnace = ?1 AND (?2 = '' OR source = ?2) "
        "ORDER BY at_us DESC LIMIT 1");
    query.bind(1, std::string(furnace));
    query.bind(2, std::string(source));
    if (!query.executeStep()) return std::nullopt;
    return push_from(query);
  });
}

std::vector<LibraryRow> Reader::library(std::string_view kind) {
  return impl_->read("read the library", [&] {
    auto& query = impl_->statement("SELECT " HF_LIBRARY_COLUMNS
                                   " FROM library AS l WHERE kind = ? AND version = (SELECT max(version) "
                                   "FROM library WHERE kind = l.kind AND key = l.key) AND retired = 0 "
                                   "ORDER BY name, key");
    query.bind(1, std::string(kind));
    std::vector<LibraryRow> rows;
    while (query.executeStep()) rows.push_back(library_from(query));
    return rows;
  });
}

std::optional<LibraryRow> Reader::library_item(std::string_view kind, std::string_view key,
                                               std::int64_t version) {
  return impl_->read("read a library entry", [&]() -> std::optional<LibraryRow> {
    auto& query = impl_->statement("SELECT " HF_LIBRARY_COLUMNS
                                   " FROM library WHERE kind = ?1 AND key = ?2 AND (?3 = 0 OR version = ?3) "
                                   "ORDER BY version DESC LIMIT 1");
    query.bind(1, std::string(kind));
    query.bind(2, std::string(key));
    query.bind(3, version);
    if (!query.executeStep()) return std::nullopt;
    return library_from(query);
  });
}

std::vector<LibraryRow> Reader::library_versions(std::string_view kind, std::string_view key) {
  return impl_->read("read the versions of a library entry", [&] {
    auto& query = impl_->statement("SELECT " HF_LIBRARY_COLUMNS
                                   " FROM library WHERE kind = ? AND key = ? ORDER BY version");
    query.bind(1, std::string(kind));
    query.bind(2, std::string(key));
    std::vector<LibraryRow> rows;
    while (query.executeStep()) rows.push_back(library_from(query));
    return rows;
  });
}

std::vector<Conflict> Reader::conflicts(std::int64_t channel, std::int64_t from_us, std::int64_t to_us,
                                        int limit) {
  check_limit(limit);
  return impl_->read("read conflicting readings", [&] {
    // The search ends with the last conflict there is: a channel without any is not read through.
    auto& total = impl_->statement("SELECT conflicts FROM channel WHERE id = ?");
    total.bind(1, channel);
    const std::int64_t known = total.executeStep() ? total.getColumn(0).getInt64() : 0;
    if (known == 0) return std::vector<Conflict>{};
    const auto chosen = impl_->choices(channel, from_us, to_us);
    auto& query = impl_->statement(
        "SELECT time_us, value FROM reading WHERE channel = ?1 AND time_us IN (SELECT time_us FROM reading "
        "WHERE channel = ?1 AND time_us BETWEEN ?2 AND ?3 GROUP BY time_us HAVING count(*) > 1 "
        "ORDER BY time_us DESC LIMIT ?4) ORDER BY time_us DESC, value");
    query.bind(1, channel);
    query.bind(2, from_us);
    query.bind(3, to_us);
    query.bind(4, std::min<std::int64_t>(limit, known));
    std::vector<Conflict> rows;
    while (query.executeStep()) {
      const std::int64_t time_us = query.getColumn(0).getInt64();
      if (rows.empty() || rows.back().time_us != time_us) {
        rows.push_back({time_us, {}, std::nullopt});
        if (const auto found = chosen.find(time_us); found != chosen.end())
          rows.back().choice = found->second;
      }
      rows.back().values.push_back(query.getColumn(1).getDouble());
    }
    return rows;
  });
}

std::vector<MaskRow> Reader::masks(std::int64_t channel, std::int64_t from_us, std::int64_t to_us) {
  return impl_->read("read marked stretches", [&] {
    auto& query = impl_->statement(
        "SELECT id, from_us, to_us, at_us, person, reason, withdrawn FROM mask WHERE channel = ? AND from_us "
        "<= ? "
        "AND to_us >= ? ORDER BY from_us, id");
    query.bind(1, channel);
    query.bind(2, to_us);
    query.bind(3, from_us);
    std::vector<MaskRow> rows;
    while (query.executeStep())
      rows.push_back({.id = query.getColumn(0).getInt64(),
                      .channel = channel,
                      .from_us = query.getColumn(1).getInt64(),
                      .to_us = query.getColumn(2).getInt64(),
                      .at_us = query.getColumn(3).getInt64(),
                      .person = query.getColumn(4).getString(),
                      .reason = query.getColumn(5).getString(),
                      .withdrawn = query.getColumn(6).getInt() != 0});
    return rows;
  });
}

}  // namespace hearthfront::storage
