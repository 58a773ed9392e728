// The read side of the front door, part two: loads with their revisions, notes and results, and the audit
// trail.
#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Statement.h>

#include "storage/reader_impl.h"
#include "storage/rows.h"

namespace hearthfront::storage {
namespace {

#define HF_RESULT_COLUMNS "revision, computed_us, model_version, result_json, superseded"

ResultRow result_from(SQLite::Statement& query, std::int64_t load) {
  return {.load = load,
          .revision = query.getColumn(0).getInt64(),
          .computed_us = query.getColumn(1).getInt64(),
          .model_version = query.getColumn(2).getString(),
          .result_json = query.getColumn(3).getString(),
          .superseded = query.getColumn(4).getInt() != 0};
}

}  // namespace

std::optional<LoadRow> Reader::load(std::int64_t id) {
  return impl_->read("read a load", [&]() -> std::optional<LoadRow> {
    auto& query = impl_->statement("SELECT " HF_LOAD_COLUMNS " FROM load WHERE id = ?");
    query.bind(1, id);
    if (!query.executeStep()) return std::nullopt;
    return load_from(query);
  });
}

std::vector<LoadRow> Reader::loads(std::string_view furnace, std::optional<bool> open, std::int64_t before_id,
                                   int limit) {
  check_limit(limit);
  return impl_->read("list loads", [&] {
    auto& query = impl_->statement("SELECT " HF_LOAD_COLUMNS
                                   " FROM load WHERE (?1 = '' OR furnace = ?1 OR EXISTS(SELECT 1 FROM "
                                   "load_stay s WHERE s.load = load.id AND s.furnace = ?1)) "
                                   "AND (?2 IS NULL OR (ended_us IS NULL) = ?2) AND (?3 = 0 OR id < ?3) "
                                   "ORDER BY id DESC LIMIT ?4");
    query.bind(1, std::string(furnace));
    bind_optional(query, 2, open ? std::optional<std::int64_t>(*open ? 1 : 0) : std::nullopt);
    query.bind(3, before_id);
    query.bind(4, limit);
    std::vector<LoadRow> rows;
    while (query.executeStep()) rows.push_back(load_from(query));
    return rows;
  });
}

std::vector<LoadRow> Reader::open_loads() {
  return impl_->read("list open loads", [&] {
    auto& query = impl_->statement("SELECT " HF_LOAD_COLUMNS " FROM load WHERE ended_us IS NULL ORDER BY id");
    std::vector<LoadRow> rows;
    while (query.executeStep()) rows.push_back(load_from(query));
    return rows;
  });
}

std::vector<LoadRow> Reader::ended_touching(std::string_view furnace, std::int64_t from_us,
                                            std::int64_t to_us) {
  return impl_->read("list ended loads of a stretch of time", [&] {
    auto& query = impl_->statement("SELECT " HF_LOAD_COLUMNS
                                   " FROM load WHERE ended_us >= ?2 AND EXISTS(SELECT 1 FROM load_stay s "
                                   "WHERE s.load = load.id AND s.furnace = ?1 AND s.from_us <= ?3) "
                                   "ORDER BY +id");
    query.bind(1, std::string(furnace));
    query.bind(2, from_us);
    query.bind(3, to_us);
    std::vector<LoadRow> rows;
    while (query.executeStep()) rows.push_back(load_from(query));
    return rows;
  });
}

std::vector<LoadRow> Reader::ended_without_result() {
  return impl_->read("list ended loads without a result", [&] {
    auto& query = impl_->statement(
        "SELECT " HF_LOAD_COLUMNS
        " FROM load WHERE ended_us IS NOT NULL AND cancelled = 0 AND NOT EXISTS(SELECT 1 FROM result "
        "WHERE result.load = load.id AND result.revision = load.revision) ORDER BY id");
    std::vector<LoadRow> rows;
    while (query.executeStep()) rows.push_back(load_from(query));
    return rows;
  });
}

std::vector<LoadRevision> Reader::revisions(std::int64_t load) {
  return impl_->read("read the revisions of a load", [&] {
    auto& query = impl_->statement(
        "SELECT revision, at_us, person, what, definition_before, definition_after, ended_before_us, "
        "ended_after_us FROM load_revision WHERE load = ? ORDER BY revision");
    query.bind(1, load);
    std::vector<LoadRevision> rows;
    while (query.executeStep()) {
      rows.push_back({.load = load,
                      .revision = query.getColumn(0).getInt64(),
                      .at_us = query.getColumn(1).getInt64(),
                      .person = query.getColumn(2).getString(),
                      .what = query.getColumn(3).getString(),
                      .definition_before = query.getColumn(4).getString(),
                      .definition_after = query.getColumn(5).getString(),
                      .ended_before_us = optional_column(query, 6),
                      .ended_after_us = optional_column(query, 7)});
    }
    return rows;
  });
}

std::vector<LoadNote> Reader::notes(std::int64_t load) {
  return impl_->read("read the notes of a load", [&] {
    auto& query =
        impl_->statement("SELECT id, at_us, person, text FROM load_note WHERE load = ? ORDER BY id");
    query.bind(1, load);
    std::vector<LoadNote> rows;
    while (query.executeStep()) {
      rows.push_back({.id = query.getColumn(0).getInt64(),
                      .load = load,
                      .at_us = query.getColumn(1).getInt64(),
                      .person = query.getColumn(2).getString(),
                      .text = query.getColumn(3).getString()});
    }
    return rows;
  });
}

std::vector<ResultRow> Reader::results(std::int64_t load) {
  return impl_->read("read the results of a load", [&] {
    auto& query = impl_->statement("SELECT " HF_RESULT_COLUMNS " FROM result WHERE load = ? ORDER BY id");
    query.bind(1, load);
    std::vector<ResultRow> rows;
    while (query.executeStep()) rows.push_back(result_from(query, load));
    return rows;
  });
}

std::optional<ResultRow> Reader::result(std::int64_t load) {
  return impl_->read("read the result of a load", [&]() -> std::optional<ResultRow> {
    auto& query = impl_->statement("SELECT " HF_RESULT_COLUMNS
                                   " FROM result WHERE load = ? AND superseded = 0 ORDER BY id DESC LIMIT 1");
    query.bind(1, load);
    if (!query.executeStep()) return std::nullopt;
    return result_from(query, load);
  });
}

std::vector<AuditRow> Reader::audit(std::string_view subject, int limit) {
  check_limit(limit);
  return impl_->read("read the audit trail", [&] {
    auto& query = impl_->statement(
        "SELECT at_us, person, action, subject, before_json, after_json FROM audit "
        "WHERE ?1 = '' OR subject = ?1 ORDER BY id DESC LIMIT ?2");
    query.bind(1, std::string(subject));
    query.bind(2, limit);
    std::vector<AuditRow> rows;
    while (query.executeStep()) {
      rows.push_back({.at_us = query.getColumn(0).getInt64(),
                      .person = query.getColumn(1).getString(),
                      .action = query.getColumn(2).getString(),
                      .subject = query.getColumn(3).getString(),
                      .before_json = query.getColumn(4).getString(),
                      .after_json = query.getColumn(5).getString()});
    }
    return rows;
  });
}

}  // namespace hearthfront::storage
