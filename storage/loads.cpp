#include "storage/loads.h"

#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Statement.h>

#include <array>
#include <ctime>

#include "storage/connection.h"
#include "storage/rows.h"

namespace hearthfront::storage {
namespace {

std::string utc(std::int64_t time_us) {
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

std::string subject_of(std::int64_t load) {
  return "load " + std::to_string(load);
}

LoadRow existing_load(Connection& connection, std::int64_t id) {
  auto& query = connection.statement("SELECT " HF_LOAD_COLUMNS " FROM load WHERE id = ?");
  query.bind(1, id);
  if (!query.executeStep()) {
    throw StorageError(StorageFault::misuse,
                       "There is no load with number " + std::to_string(id) + ". Check the number.");
  }
  LoadRow row = load_from(query);
  query.tryReset();
  return row;
}

// A load occupies its chamber from its start up to, but not at, its end.
void refuse_overlap(Connection& connection, const LoadRow& row) {
  if (row.ended_us && *row.ended_us <= row.started_us) {
    throw StorageError(StorageFault::misuse, "Load " + row.name + " would end at " + utc(*row.ended_us) +
                                                 ", not after its start at " + utc(row.started_us) +
                                                 ". Correct one of the two times.");
  }
  auto& query = connection.statement("SELECT " HF_LOAD_COLUMNS
                                     " FROM load WHERE furnace = ?1 AND chamber = ?2 AND id <> ?3 "
                                     "AND (?5 IS NULL OR started_us < ?5) "
                                     "AND (ended_us IS NULL OR ended_us > ?4) ORDER BY started_us LIMIT 1");
  query.bind(1, row.furnace);
  query.bind(2, row.chamber);
  query.bind(3, row.id);
  query.bind(4, row.started_us);
  bind_optional(query, 5, row.ended_us);
  if (!query.executeStep()) return;
  const LoadRow other = load_from(query);
  query.tryReset();
  throw StorageError(StorageFault::misuse,
                     "Load " + other.name + " (number " + std::to_string(other.id) + ") is in chamber " +
                         row.chamber + " of " + row.furnace + " from " + utc(other.started_us) +
                         (other.ended_us ? " to " + utc(*other.ended_us) : ", still without an end") +
                         ", which overlaps load " + row.name +
                         ". End that load first, or correct the times or the chamber.");
}

void insert_revision(Connection& connection, const LoadRevision& row) {
  auto& insert = connection.statement(
      "INSERT INTO load_revision(load, revision, at_us, person, what, definition_before, definition_after, "
      "ended_before_us, ended_after_us) VALUES(?, ?, ?, ?, ?, ?, ?, ?, ?)");
  insert.bind(1, row.load);
  insert.bind(2, row.revision);
  insert.bind(3, row.at_us);
  insert.bind(4, row.person);
  insert.bind(5, row.what);
  insert.bind(6, row.definition_before);
  insert.bind(7, row.definition_after);
  bind_optional(insert, 8, row.ended_before_us);
  bind_optional(insert, 9, row.ended_after_us);
  insert.exec();
}

void record_step(Connection& connection, const LoadRow& before, const LoadRow& after, AuditRow audit) {
  insert_revision(connection, {.load = after.id,
                               .revision = after.revision,
                               .at_us = audit.at_us,
                               .person = audit.person,
                               .what = audit.action,
                               .definition_before = before.definition_json,
                               .definition_after = after.definition_json,
                               .ended_before_us = before.ended_us,
                               .ended_after_us = after.ended_us});
  if (audit.subject.empty()) audit.subject = subject_of(after.id);
  insert_audit(connection, audit);
}

}  // namespace

std::int64_t insert_load(Connection& connection, const LoadRow& row, AuditRow audit) {
  LoadRow stored = row;
  stored.id = 0;
  stored.revision = 1;
  if (stored.created_us == 0) stored.created_us = audit.at_us;
  refuse_overlap(connection, stored);
  auto& insert = connection.statement(
      "INSERT INTO load(name, furnace, chamber, person, started_us, ended_us, created_us, revision, "
      "definition_json) VALUES(?, ?, ?, ?, ?, ?, ?, ?, ?)");
  insert.bind(1, stored.name);
  insert.bind(2, stored.furnace);
  insert.bind(3, stored.chamber);
  insert.bind(4, stored.person);
  insert.bind(5, stored.started_us);
  bind_optional(insert, 6, stored.ended_us);
  insert.bind(7, stored.created_us);
  insert.bind(8, stored.revision);
  insert.bind(9, stored.definition_json);
  insert.exec();
  stored.id = connection.last_row_id();
  record_step(connection, {}, stored, std::move(audit));
  return stored.id;
}

void revise_load(Connection& connection, std::int64_t id, std::int64_t expected_revision,
                 const std::string& definition_json, std::optional<std::int64_t> ended_us, AuditRow audit) {
  const LoadRow before = existing_load(connection, id);
  if (before.revision != expected_revision) {
    throw StorageError(StorageFault::misuse, "Load " + before.name + " (number " + std::to_string(id) +
                                                 ") is at revision " + std::to_string(before.revision) +
                                                 ", not " + std::to_string(expected_revision) +
                                                 ": someone changed it meanwhile. Read it again, then repeat "
                                                 "the change.");
  }
  LoadRow after = before;
  ++after.revision;
  after.ended_us = ended_us;
  if (!definition_json.empty()) after.definition_json = definition_json;
  refuse_overlap(connection, after);
  auto& update =
      connection.statement("UPDATE load SET revision = ?, ended_us = ?, definition_json = ? WHERE id = ?");
  update.bind(1, after.revision);
  bind_optional(update, 2, after.ended_us);
  update.bind(3, after.definition_json);
  update.bind(4, id);
  update.exec();
  record_step(connection, before, after, std::move(audit));
}

std::int64_t insert_note(Connection& connection, const LoadNote& note) {
  existing_load(connection, note.load);
  auto& insert = connection.statement("INSERT INTO load_note(load, at_us, person, text) VALUES(?, ?, ?, ?)");
  insert.bind(1, note.load);
  insert.bind(2, note.at_us);
  insert.bind(3, note.person);
  insert.bind(4, note.text);
  insert.exec();
  return connection.last_row_id();
}

void insert_result(Connection& connection, const ResultRow& row) {
  const LoadRow load = existing_load(connection, row.load);
  if (row.revision < 1 || row.revision > load.revision) {
    throw StorageError(StorageFault::misuse, "A result for revision " + std::to_string(row.revision) +
                                                 " of load " + load.name +
                                                 " cannot be kept: the load is at revision " +
                                                 std::to_string(load.revision) + ". Compute it again.");
  }
  auto& mark = connection.statement(
      "UPDATE result SET superseded = 1 WHERE load = ? AND superseded = 0 AND revision <= ?");
  mark.bind(1, row.load);
  mark.bind(2, row.revision);
  mark.exec();
  // A slow computation of an older revision must not take the place of a newer one's result.
  auto& insert = connection.statement(
      "INSERT INTO result(load, revision, computed_us, model_version, result_json, superseded) "
      "VALUES(?1, ?2, ?3, ?4, ?5, EXISTS(SELECT 1 FROM result WHERE load = ?1 AND superseded = 0))");
  insert.bind(1, row.load);
  insert.bind(2, row.revision);
  insert.bind(3, row.computed_us);
  insert.bind(4, row.model_version);
  insert.bind(5, row.result_json);
  insert.exec();
}

void insert_audit(Connection& connection, const AuditRow& row) {
  auto& insert = connection.statement(
      "INSERT INTO audit(at_us, person, action, subject, before_json, after_json) VALUES(?, ?, ?, ?, ?, ?)");
  insert.bind(1, row.at_us);
  insert.bind(2, row.person);
  insert.bind(3, row.action);
  insert.bind(4, row.subject);
  insert.bind(5, row.before_json);
  insert.bind(6, row.after_json);
  insert.exec();
}

}  // namespace hearthfront::storage
