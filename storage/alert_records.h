// Records of alerts and of what is sent to targets; store.h brings them. An alert is one condition of one
// furnace, load or part, however often the condition comes and goes for a while.
//
// Times are microseconds since 1970-01-01 UTC: `clock` is the daemon's clock, `data` the time of readings.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "storage/audit_row.h"

namespace hearthfront::storage {

// waiting: the condition is there, not yet for long enough to be told. resting: it has gone, and would come
// back as this same alert for a while yet. cleared: past, never changed again.
enum class AlertState : std::uint8_t { waiting, active, resting, cleared };

struct AlertRow {
  std::int64_t id = 0;           // given by the writer of the row, see Reader::next_alert_id
  std::string key;               // of the condition; only one alert that is not cleared has it
  std::string kind, severity;    // severity: "note", "warning", "urgent"
  std::string furnace;           // empty: the daemon's own
  std::int64_t load = 0;         // 0: none
  std::string subject;           // item or channel, may be empty
  std::string sentence, advice;  // advice may be empty
  AlertState state = AlertState::waiting;
  std::int64_t since_us = 0;                // data (or clock, where there is none): the condition began
  std::optional<std::int64_t> raised_us;    // clock: active for the first time
  std::int64_t last_seen_us = 0;            // data or clock as since_us: the condition was last there
  std::optional<std::int64_t> clearing_us;  // as since_us: from then on the condition has been gone
  std::optional<std::int64_t> cleared_us;   // clock: no longer active; unset again when it comes back
  std::int64_t times = 1;                   // how often the condition came
  std::int64_t asking_us = 0;               // clock: since when it asks for a person, again when it got worse
  std::int64_t escalated = 0;               // how often it was passed on because nobody acknowledged it
  std::int64_t escalated_us = 0;            // clock: up to when passing on was looked at
  std::optional<std::int64_t> acknowledged_us;  // clock
  std::string acknowledged_by;
  std::optional<std::int64_t> shelved_until_us;  // clock
  std::string shelved_by, shelved_reason;
  bool operator==(const AlertRow&) const = default;
};

// Something that happened to an alert; never changed or deleted.
struct AlertEvent {
  std::int64_t id = 0, alert = 0, at_us = 0;  // clock
  std::string person;                         // empty: the daemon
  std::string what, text;                     // what: "raised", "acknowledged", "note" ...
};

enum class DeliveryState : std::uint8_t { waiting, delivered, stuck, dropped };

// One message to one target. All but the last five fields never change.
struct OutboxRow {
  std::int64_t id = 0, alert = 0, created_us = 0;
  std::string target, event;  // event: what happened, as in AlertEvent
  std::string key;            // idempotency key: unique, the same at each try
  std::string payload_json;
  DeliveryState state = DeliveryState::waiting;
  std::int64_t attempts = 0;
  std::int64_t next_try_us = 0;  // clock
  std::optional<std::int64_t> delivered_us;
  std::string last_error;
};

// What became of one try.
struct DeliveryNote {
  std::int64_t outbox = 0;
  DeliveryState state = DeliveryState::waiting;
  std::int64_t attempts = 0, next_try_us = 0;
  std::optional<std::int64_t> delivered_us;
  std::string last_error;
};

// Everything that one look at the conditions, or one person, changes: stored whole or not at all.
struct AlertWrite {
  std::vector<AlertRow> rows;         // new or changed, by id
  std::vector<std::int64_t> removed;  // waiting ones whose condition went before it was told
  std::vector<AlertEvent> events;
  std::vector<OutboxRow> outbox;
  std::vector<AuditRow> audits;  // one for each change by a person
  bool empty() const {
    return rows.empty() && removed.empty() && events.empty() && outbox.empty() && audits.empty();
  }
};

struct AlertFilter {
  std::optional<bool> past;    // true: resting and cleared, false: active, none: both
  std::string furnace;         // empty: all
  std::int64_t load = 0;       // 0: all
  std::int64_t before_id = 0;  // 0: from the newest
  int limit = 50;              // 1 or more
};

struct DeliveryCounts {
  std::int64_t waiting = 0, delivered = 0, stuck = 0;
};

struct TargetState {
  std::string target;
  std::int64_t waiting = 0, stuck = 0;
  std::optional<std::int64_t> last_delivered_us;
  std::string last_error;  // of the newest message that has one
};

}  // namespace hearthfront::storage
