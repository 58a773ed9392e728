#include "storage/loads.h"

#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Statement.h>

#include "storage/connection.h"
#include "storage/rows.h"
#include "storage/stays.h"

namespace hearthfront::storage {
namespace {

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

void refuse_backward(const LoadRow& row) {
  if (!row.ended_us || *row.ended_us > row.started_us) return;
  throw StorageError(StorageFault::misuse, "Load " + row.name + " would end at " + utc_text(*row.ended_us) +
                                               ", not after its start at " + utc_text(row.started_us) +
                                               ". Correct one of the two times.");
}

void refuse_stale(const LoadRow& stored, std::int64_t expected_revision) {
  if (stored.revision == expected_revision) return;
  throw StorageError(StorageFault::misuse, "Load " + stored.name + " (number " + std::to_string(stored.id) +
                                               ") is at revision " + std::to_string(stored.revision) +
                                               ", not " + std::to_string(expected_revision) +
                                               ": someone changed it meanwhile. Read it again, then repeat "
                                               "the change.");
}

void update_load(Connection& connection, const LoadRow& row) {
  auto& update = connection.statement(
      "UPDATE load SET name = ?, furnace = ?, chamber = ?, started_us = ?, ended_us = ?, revision = ?, "
      "definition_json = ?, cancelled = ? WHERE id = ?");
  update.bind(1, row.name);
  update.bind(2, row.furnace);
  update.bind(3, row.chamber);
  update.bind(4, row.started_us);
  bind_optional(update, 5, row.ended_us);
  update.bind(6, row.revision);
  update.bind(7, row.definition_json);
  update.bind(8, row.cancelled ? 1 : 0);
  update.bind(9, row.id);
  update.exec();
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

std::int64_t insert_load(Connection& connection, const LoadRow& row, std::vector<Stay> stays,
                         AuditRow audit) {
  LoadRow stored = row;
  stored.revision = 1;
  if (stored.created_us == 0) stored.created_us = audit.at_us;
  if (stays.empty()) stays.push_back({stored.furnace, stored.chamber, stored.started_us, stored.ended_us, 1});
  auto& insert = connection.statement(
      "INSERT INTO load(name, furnace, chamber, person, started_us, ended_us, created_us, revision, "
      "definition_json) VALUES(?, ?, ?, ?, ?, ?, ?, ?, ?)");
  refuse_backward(stored);
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
  insert_stays(connection, stored, stays);
  record_step(connection, {}, stored, std::move(audit));
  return stored.id;
}

void revise_loads(Connection& connection, const std::vector<LoadChange>& changes,
                  const std::vector<AuditRow>& audits, const std::optional<PushRow>& push) {
  if ((changes.empty() && !push) || changes.size() != audits.size())
    throw StorageError(StorageFault::misuse, "A change of loads needs one audit row for each load.");
  std::vector<LoadRow> before, after;
  for (const LoadChange& change : changes) {
    before.push_back(existing_load(connection, change.row.id));
    refuse_stale(before.back(), change.expected_revision);
    LoadRow row = change.row;
    row.person = before.back().person;
    row.created_us = before.back().created_us;
    row.revision = before.back().revision + 1;
    if (row.definition_json.empty()) row.definition_json = before.back().definition_json;
    refuse_backward(row);
    after.push_back(std::move(row));
    // All places are given up before any is taken: loads that move together pass through each other.
    remove_stays(connection, change.row.id);
  }
  for (std::size_t i = 0; i < changes.size(); ++i) {
    update_load(connection, after[i]);
    insert_stays(connection, after[i], changes[i].stays);
    record_step(connection, before[i], after[i], audits[i]);
  }
  if (push) insert_push(connection, *push);
}

void revise_load(Connection& connection, std::int64_t id, std::int64_t expected_revision,
                 const std::string& definition_json, std::optional<std::int64_t> ended_us, AuditRow audit) {
  LoadChange change{expected_revision, existing_load(connection, id), stays_of(connection, id)};
  change.row.ended_us = ended_us;
  change.row.definition_json = definition_json;
  if (!change.stays.empty()) change.stays.back().to_us = ended_us;
  revise_loads(connection, {change}, {std::move(audit)}, std::nullopt);
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
