// The read side of the front door, part four: alerts, their events, and the messages about them.
#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Statement.h>

#include <string>

#include "storage/alert_rows.h"
#include "storage/reader_impl.h"
#include "storage/rows.h"

namespace hearthfront::storage {
namespace {

std::vector<AlertRow> alerts_from(SQLite::Statement& query) {
  std::vector<AlertRow> rows;
  while (query.executeStep()) rows.push_back(alert_from(query));
  return rows;
}

std::vector<OutboxRow> messages_from(SQLite::Statement& query) {
  std::vector<OutboxRow> rows;
  while (query.executeStep()) rows.push_back(outbox_from(query));
  return rows;
}

}  // namespace

std::vector<AlertRow> Reader::open_alerts() {
  return impl_->read("read the open alerts", [&] {
    return alerts_from(
        impl_->statement("SELECT " HF_ALERT_COLUMNS " FROM alert WHERE state <> 'cleared' ORDER BY id"));
  });
}

std::vector<AlertRow> Reader::alerts(const AlertFilter& filter) {
  check_limit(filter.limit);
  return impl_->read("read alerts", [&] {
    auto& query =
        impl_->statement("SELECT " HF_ALERT_COLUMNS
                         " FROM alert WHERE (?1 = 0 OR id < ?1) AND state <> 'waiting' AND (?2 < 0 OR ?2 = "
                         "(state <> 'active')) "
                         "AND (?3 = '' OR furnace = ?3) AND (?4 = 0 OR load = ?4) ORDER BY id DESC LIMIT ?5");
    query.bind(1, filter.before_id);
    query.bind(2, filter.past ? (*filter.past ? 1 : 0) : -1);
    query.bind(3, filter.furnace);
    query.bind(4, filter.load);
    query.bind(5, filter.limit);
    return alerts_from(query);
  });
}

std::optional<AlertRow> Reader::alert(std::int64_t id) {
  return impl_->read("read an alert", [&]() -> std::optional<AlertRow> {
    auto& query = impl_->statement("SELECT " HF_ALERT_COLUMNS " FROM alert WHERE id = ?");
    query.bind(1, id);
    if (!query.executeStep()) return std::nullopt;
    return alert_from(query);
  });
}

std::int64_t Reader::next_alert_id() {
  return impl_->read("read the last alert's number", [&]() -> std::int64_t {
    auto& query = impl_->statement("SELECT seq FROM sqlite_sequence WHERE name = 'alert'");
    return query.executeStep() ? query.getColumn(0).getInt64() + 1 : 1;
  });
}

std::vector<AlertEvent> Reader::alert_events(std::int64_t alert) {
  return impl_->read("read what happened to an alert", [&] {
    auto& query = impl_->statement(
        "SELECT id, alert, at_us, person, what, text FROM alert_event WHERE alert = ? ORDER BY id");
    query.bind(1, alert);
    std::vector<AlertEvent> rows;
    while (query.executeStep())
      rows.push_back({.id = query.getColumn(0).getInt64(),
                      .alert = query.getColumn(1).getInt64(),
                      .at_us = query.getColumn(2).getInt64(),
                      .person = query.getColumn(3).getString(),
                      .what = query.getColumn(4).getString(),
                      .text = query.getColumn(5).getString()});
    return rows;
  });
}

std::vector<OutboxRow> Reader::outbox_due(std::int64_t now_us, int limit) {
  check_limit(limit);
  return impl_->read("read the messages that are due", [&] {
    auto& query = impl_->statement(
        "SELECT " HF_OUTBOX_COLUMNS
        " FROM outbox WHERE state = 'waiting' AND next_try_us <= ? ORDER BY next_try_us, id LIMIT ?");
    query.bind(1, now_us);
    query.bind(2, limit);
    return messages_from(query);
  });
}

std::optional<std::int64_t> Reader::outbox_next_us() {
  return impl_->read("read when the next message is due", [&] {
    auto& query = impl_->statement("SELECT min(next_try_us) FROM outbox WHERE state = 'waiting'");
    query.executeStep();
    return optional_column(query, 0);
  });
}

std::vector<OutboxRow> Reader::deliveries(std::int64_t alert) {
  return impl_->read("read the messages of an alert", [&] {
    auto& query = impl_->statement("SELECT " HF_OUTBOX_COLUMNS " FROM outbox WHERE alert = ? ORDER BY id");
    query.bind(1, alert);
    return messages_from(query);
  });
}

DeliveryCounts Reader::delivery_counts(std::int64_t alert) {
  return impl_->read("count the messages of an alert", [&] {
    auto& query = impl_->statement("SELECT state, count(*) FROM outbox WHERE alert = ? GROUP BY state");
    query.bind(1, alert);
    DeliveryCounts counts;
    while (query.executeStep()) {
      const std::string state = query.getColumn(0).getString();
      const std::int64_t count = query.getColumn(1).getInt64();
      if (state == word(DeliveryState::waiting)) counts.waiting = count;
      if (state == word(DeliveryState::delivered)) counts.delivered = count;
      if (state == word(DeliveryState::stuck)) counts.stuck = count;
    }
    return counts;
  });
}

std::vector<TargetState> Reader::targets() {
  return impl_->read("count the messages of the targets", [&] {
    // The names are walked along the index, one step a target: the messages themselves may be many.
    auto& names = impl_->statement(
        "WITH RECURSIVE name(t) AS (SELECT min(target) FROM outbox UNION ALL "
        "SELECT (SELECT min(target) FROM outbox WHERE target > name.t) FROM name WHERE name.t IS NOT NULL) "
        "SELECT t, (SELECT count(*) FROM outbox WHERE target = t AND state = 'waiting' AND state IN "
        "('waiting', 'stuck')), (SELECT count(*) FROM outbox WHERE target = t AND state = 'stuck' AND state "
        "IN "
        "('waiting', 'stuck')), (SELECT max(delivered_us) FROM outbox WHERE target = t AND state = "
        "'delivered'), "
        "(SELECT last_error FROM outbox WHERE target = t AND last_error <> '' ORDER BY id DESC LIMIT 1) "
        "FROM name WHERE t IS NOT NULL");
    std::vector<TargetState> rows;
    while (names.executeStep()) {
      TargetState row;
      row.target = names.getColumn(0).getString();
      row.waiting = names.getColumn(1).getInt64();
      row.stuck = names.getColumn(2).getInt64();
      row.last_delivered_us = optional_column(names, 3);
      if (!names.getColumn(4).isNull()) row.last_error = names.getColumn(4).getString();
      rows.push_back(std::move(row));
    }
    return rows;
  });
}

}  // namespace hearthfront::storage
