#include "storage/alert_rows.h"

#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Statement.h>

#include <array>
#include <string>

#include "storage/rows.h"

namespace hearthfront::storage {
namespace {

constexpr std::array<std::string_view, 4> alert_words{"waiting", "active", "resting", "cleared"};
constexpr std::array<std::string_view, 4> delivery_words{"waiting", "delivered", "stuck", "dropped"};

// A word that is not in the list cannot be stored: the tables check it.
template <typename State, std::size_t n>
State state_of(const std::array<std::string_view, n>& words, std::string_view word) {
  for (std::size_t i = 0; i < n; ++i)
    if (words[i] == word) return static_cast<State>(i);
  throw StorageError(StorageFault::corrupt, "An alert table holds the state \"" + std::string(word) +
                                                "\", which this program does not know. Restore a backup.");
}

}  // namespace

std::string_view word(AlertState state) {
  return alert_words.at(static_cast<std::size_t>(state));
}

std::string_view word(DeliveryState state) {
  return delivery_words.at(static_cast<std::size_t>(state));
}

AlertRow alert_from(SQLite::Statement& query) {
  AlertRow row;
  row.id = query.getColumn(0).getInt64();
  row.key = query.getColumn(1).getString();
  row.kind = query.getColumn(2).getString();
  row.severity = query.getColumn(3).getString();
  row.furnace = query.getColumn(4).getString();
  row.load = query.getColumn(5).getInt64();
  row.subject = query.getColumn(6).getString();
  row.sentence = query.getColumn(7).getString();
  row.advice = query.getColumn(8).getString();
  row.state = state_of<AlertState>(alert_words, query.getColumn(9).getString());
  row.since_us = query.getColumn(10).getInt64();
  row.raised_us = optional_column(query, 11);
  row.last_seen_us = query.getColumn(12).getInt64();
  row.clearing_us = optional_column(query, 13);
  row.cleared_us = optional_column(query, 14);
  row.times = query.getColumn(15).getInt64();
  row.asking_us = query.getColumn(16).getInt64();
  row.escalated = query.getColumn(17).getInt64();
  row.escalated_us = query.getColumn(18).getInt64();
  row.acknowledged_us = optional_column(query, 19);
  row.acknowledged_by = query.getColumn(20).getString();
  row.shelved_until_us = optional_column(query, 21);
  row.shelved_by = query.getColumn(22).getString();
  row.shelved_reason = query.getColumn(23).getString();
  return row;
}

void bind_alert(SQLite::Statement& statement, const AlertRow& row) {
  statement.bind(1, row.id);
  statement.bind(2, row.key);
  statement.bind(3, row.kind);
  statement.bind(4, row.severity);
  statement.bind(5, row.furnace);
  statement.bind(6, row.load);
  statement.bind(7, row.subject);
  statement.bind(8, row.sentence);
  statement.bind(9, row.advice);
  statement.bind(10, std::string(word(row.state)));
  statement.bind(11, row.since_us);
  bind_optional(statement, 12, row.raised_us);
  statement.bind(13, row.last_seen_us);
  bind_optional(statement, 14, row.clearing_us);
  bind_optional(statement, 15, row.cleared_us);
  statement.bind(16, row.times);
  statement.bind(17, row.asking_us);
  statement.bind(18, row.escalated);
  statement.bind(19, row.escalated_us);
  bind_optional(statement, 20, row.acknowledged_us);
  statement.bind(21, row.acknowledged_by);
  bind_optional(statement, 22, row.shelved_until_us);
  statement.bind(23, row.shelved_by);
  statement.bind(24, row.shelved_reason);
}

OutboxRow outbox_from(SQLite::Statement& query) {
  OutboxRow row;
  row.id = query.getColumn(0).getInt64();
  row.alert = query.getColumn(1).getInt64();
  row.created_us = query.getColumn(2).getInt64();
  row.target = query.getColumn(3).getString();
  row.event = query.getColumn(4).getString();
  row.key = query.getColumn(5).getString();
  row.payload_json = query.getColumn(6).getString();
  row.state = state_of<DeliveryState>(delivery_words, query.getColumn(7).getString());
  row.attempts = query.getColumn(8).getInt64();
  row.next_try_us = query.getColumn(9).getInt64();
  row.delivered_us = optional_column(query, 10);
  row.last_error = query.getColumn(11).getString();
  return row;
}

}  // namespace hearthfront::storage
