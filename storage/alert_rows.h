// Columns of the alert tables to records and back. Threads: none of their own.
#pragma once

#include <string_view>

#include "storage/store.h"

namespace SQLite {
class Statement;
}

namespace hearthfront::storage {

std::string_view word(AlertState state);
std::string_view word(DeliveryState state);

// Columns in the order of these lists, from column 0.
#define HF_ALERT_COLUMNS                                                                                \
  "id, key, kind, severity, furnace, load, subject, sentence, advice, state, since_us, raised_us, "     \
  "last_seen_us, clearing_us, cleared_us, times, asking_us, escalated, escalated_us, acknowledged_us, " \
  "acknowledged_by, shelved_until_us, shelved_by, shelved_reason"
AlertRow alert_from(SQLite::Statement& query);
void bind_alert(SQLite::Statement& statement, const AlertRow& row);  // from parameter 1

#define HF_OUTBOX_COLUMNS                                                                                 \
  "id, alert, created_us, target, event, key, payload_json, state, attempts, next_try_us, delivered_us, " \
  "last_error"
OutboxRow outbox_from(SQLite::Statement& query);

}  // namespace hearthfront::storage
