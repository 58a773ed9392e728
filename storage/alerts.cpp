#include "storage/alerts.h"

#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Statement.h>

#include "storage/alert_rows.h"
#include "storage/connection.h"
#include "storage/loads.h"
#include "storage/rows.h"

namespace hearthfront::storage {
namespace {

void put_alert(Connection& connection, const AlertRow& row) {
  if (row.id < 1)
    throw StorageError(StorageFault::misuse, "The alert \"" + row.key + "\" has no number. Give it one.");
  auto& put = connection.statement(
      "INSERT INTO alert(" HF_ALERT_COLUMNS
      ") VALUES(?1, ?2, ?3, ?4, ?5, ?6, ?7, ?8, ?9, ?10, ?11, ?12, ?13, ?14, ?15, ?16, ?17, ?18, ?19, ?20, "
      "?21, "
      "?22, ?23, ?24) ON CONFLICT(id) DO UPDATE SET key = ?2, kind = ?3, severity = ?4, furnace = ?5, load = "
      "?6, "
      "subject = ?7, sentence = ?8, advice = ?9, state = ?10, since_us = ?11, raised_us = ?12, "
      "last_seen_us = ?13, clearing_us = ?14, cleared_us = ?15, times = ?16, asking_us = ?17, escalated = "
      "?18, "
      "escalated_us = ?19, acknowledged_us = ?20, acknowledged_by = ?21, shelved_until_us = ?22, "
      "shelved_by = ?23, shelved_reason = ?24");
  bind_alert(put, row);
  put.exec();
}

void insert_event(Connection& connection, const AlertEvent& event) {
  auto& insert =
      connection.statement("INSERT INTO alert_event(alert, at_us, person, what, text) VALUES(?, ?, ?, ?, ?)");
  insert.bind(1, event.alert);
  insert.bind(2, event.at_us);
  insert.bind(3, event.person);
  insert.bind(4, event.what);
  insert.bind(5, event.text);
  insert.exec();
}

void insert_message(Connection& connection, const OutboxRow& row) {
  auto& insert = connection.statement(
      "INSERT INTO outbox(alert, created_us, target, event, key, payload_json, state, attempts, next_try_us, "
      "delivered_us, last_error) VALUES(?, ?, ?, ?, ?, ?, 'waiting', 0, ?, NULL, '')");
  insert.bind(1, row.alert);
  insert.bind(2, row.created_us);
  insert.bind(3, row.target);
  insert.bind(4, row.event);
  insert.bind(5, row.key);
  insert.bind(6, row.payload_json);
  insert.bind(7, row.next_try_us);
  insert.exec();
}

}  // namespace

void save_alerts(Connection& connection, const AlertWrite& write) {
  // First what goes: a key that is given up may be taken again by a new row.
  for (const std::int64_t id : write.removed) {
    auto& remove = connection.statement("DELETE FROM alert WHERE id = ?");
    remove.bind(1, id);
    remove.exec();
  }
  for (const AlertRow& row : write.rows) put_alert(connection, row);
  for (const AlertEvent& event : write.events) insert_event(connection, event);
  for (const OutboxRow& row : write.outbox) insert_message(connection, row);
  for (const AuditRow& row : write.audits) insert_audit(connection, row);
}

void note_delivery(Connection& connection, const DeliveryNote& note) {
  auto& update = connection.statement(
      "UPDATE outbox SET state = ?, attempts = ?, next_try_us = ?, delivered_us = ?, last_error = ? "
      "WHERE id = ?");
  update.bind(1, std::string(word(note.state)));
  update.bind(2, note.attempts);
  update.bind(3, note.next_try_us);
  bind_optional(update, 4, note.delivered_us);
  update.bind(5, note.last_error);
  update.bind(6, note.outbox);
  if (update.exec() > 0) return;
  throw StorageError(StorageFault::misuse, "There is no message with number " + std::to_string(note.outbox) +
                                               ". Check the number.");
}

std::int64_t retry_stuck(Connection& connection, const std::string& target, const AuditRow& audit) {
  auto& update = connection.statement(
      "UPDATE outbox SET state = 'waiting', attempts = 0, next_try_us = ? WHERE target = ? AND state = "
      "'stuck'");
  update.bind(1, audit.at_us);
  update.bind(2, target);
  const std::int64_t retried = update.exec();
  insert_audit(connection, audit);
  return retried;
}

}  // namespace hearthfront::storage
