#include "storage/library.h"

#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Statement.h>

#include "storage/loads.h"
#include "storage/stays.h"
#include "storage/writer.h"

namespace hearthfront::storage {

std::int64_t insert_library(Tables& tables, LibraryRow row, std::int64_t expected_version,
                            const AuditRow& audit) {
  auto& query =
      tables.connection.statement("SELECT coalesce(max(version), 0) FROM library WHERE kind = ? AND key = ?");
  query.bind(1, row.kind);
  query.bind(2, row.key);
  query.executeStep();
  const std::int64_t newest = query.getColumn(0).getInt64();
  query.tryReset();
  if (newest != expected_version)
    throw StorageError(StorageFault::misuse,
                       newest == 0
                           ? "There is no " + row.kind + " \"" + row.key + "\" yet, so it has no version " +
                                 std::to_string(expected_version) + "."
                       : expected_version == 0
                           ? "There is a " + row.kind + " \"" + row.key +
                                 "\" already. Choose another name, or edit that one."
                           : "Somebody else saved version " + std::to_string(newest) + " of \"" + row.key +
                                 "\" meanwhile; you started from version " +
                                 std::to_string(expected_version) + ". Look at theirs, then save again.");
  row.version = newest + 1;
  auto& insert = tables.connection.statement(
      "INSERT INTO library(kind, key, version, at_us, person, name, json, retired) VALUES(?, ?, ?, ?, ?, ?, "
      "?, ?)");
  insert.bind(1, row.kind);
  insert.bind(2, row.key);
  insert.bind(3, row.version);
  insert.bind(4, row.at_us);
  insert.bind(5, row.person);
  insert.bind(6, row.name);
  insert.bind(7, row.json);
  insert.bind(8, row.retired ? 1 : 0);
  insert.exec();
  insert_audit(tables.connection, audit);
  return row.version;
}

void insert_choices(Tables& tables, const std::vector<Choice>& choices, const AuditRow& audit) {
  for (const Choice& choice : choices) {
    auto& query = tables.connection.statement(
        "SELECT count(*), sum(?3 IS NULL OR value = ?3) FROM reading WHERE channel = ?1 AND time_us = ?2");
    query.bind(1, choice.channel);
    query.bind(2, choice.time_us);
    if (choice.value)
      query.bind(3, *choice.value);
    else
      query.bind(3);
    query.executeStep();
    const bool fits = query.getColumn(0).getInt64() >= 2 && query.getColumn(1).getInt64() >= 1;
    query.tryReset();
    if (!fits)
      throw StorageError(StorageFault::misuse,
                         "At " + utc_text(choice.time_us) +
                             " this channel has no two values of which one is the chosen "
                             "one. Read the list again; nothing was changed.");
    auto& insert = tables.connection.statement(
        "INSERT INTO choice(channel, time_us, value, at_us, person) VALUES(?, ?, ?, ?, ?) ON CONFLICT DO "
        "UPDATE "
        "SET value = excluded.value, at_us = excluded.at_us, person = excluded.person");
    insert.bind(1, choice.channel);
    insert.bind(2, choice.time_us);
    if (choice.value)
      insert.bind(3, *choice.value);
    else
      insert.bind(3);
    insert.bind(4, choice.at_us);
    insert.bind(5, choice.person);
    insert.exec();
    tables.readings.note_change({choice.channel, choice.time_us, choice.time_us});
  }
  insert_audit(tables.connection, audit);
}

std::int64_t insert_mask(Tables& tables, const MaskRow& row, const AuditRow& audit) {
  auto& insert = tables.connection.statement(
      "INSERT INTO mask(channel, from_us, to_us, at_us, person, reason) VALUES(?, ?, ?, ?, ?, ?)");
  insert.bind(1, row.channel);
  insert.bind(2, row.from_us);
  insert.bind(3, row.to_us);
  insert.bind(4, row.at_us);
  insert.bind(5, row.person);
  insert.bind(6, row.reason);
  insert.exec();
  const std::int64_t id = tables.connection.last_row_id();
  tables.readings.note_change({row.channel, row.from_us, row.to_us});
  insert_audit(tables.connection, audit);
  return id;
}

void withdraw_mask(Tables& tables, std::int64_t id, const AuditRow& audit) {
  auto& query =
      tables.connection.statement("SELECT channel, from_us, to_us FROM mask WHERE id = ? AND withdrawn = 0");
  query.bind(1, id);
  if (!query.executeStep())
    throw StorageError(StorageFault::misuse, "There is no marked stretch with number " + std::to_string(id) +
                                                 ", or somebody withdrew it already.");
  const ChangedSpan span{query.getColumn(0).getInt64(), query.getColumn(1).getInt64(),
                         query.getColumn(2).getInt64()};
  query.tryReset();
  auto& update = tables.connection.statement("UPDATE mask SET withdrawn = 1 WHERE id = ?");
  update.bind(1, id);
  update.exec();
  tables.readings.note_change(span);
  insert_audit(tables.connection, audit);
}

}  // namespace hearthfront::storage
