// Alerts and the messages about them: state and outbox together, one open alert a condition, nothing past
// rewritten. The rules are the project's own.
#include <doctest/doctest.h>

#include "storage/store.h"
#include "storage/support.h"

using namespace hearthfront::storage;
using namespace hearthfront::storage::test;

namespace {

AlertRow waiting(std::int64_t id, const std::string& key = "gap|pit-2|0|") {
  AlertRow row;
  row.id = id;
  row.key = key;
  row.kind = "gap";
  row.severity = "warning";
  row.furnace = "pit-2";
  row.sentence = "No reading counts at present.";
  row.since_us = row.last_seen_us = 900;
  return row;
}

AlertRow active(std::int64_t id, const std::string& key = "gap|pit-2|0|") {
  AlertRow row = waiting(id, key);
  row.state = AlertState::active;
  row.raised_us = row.asking_us = row.escalated_us = 1'000;
  return row;
}

AlertRow cleared(std::int64_t id, const std::string& key = "gap|pit-2|0|") {
  AlertRow row = active(id, key);
  row.state = AlertState::cleared;
  row.cleared_us = 2'000;
  return row;
}

OutboxRow message(std::int64_t alert, const std::string& key, const std::string& target = "phone",
                  std::int64_t due_us = 1'000) {
  OutboxRow row;
  row.alert = alert;
  row.created_us = 1'000;
  row.target = target;
  row.event = "raised";
  row.key = key;
  row.payload_json = "{\"key\":\"" + key + "\"}";
  row.next_try_us = due_us;
  return row;
}

AlertWrite raised(std::int64_t id, const std::string& key = "gap|pit-2|0|") {
  AlertWrite write;
  write.rows = {active(id, key)};
  write.events = {{.alert = id, .at_us = 1'000, .person = "", .what = "raised", .text = "at last"}};
  write.outbox = {message(id, std::to_string(id) + "-raised-phone")};
  return write;
}

struct Bench {
  Folder folder;
  Store store{at(folder.database())};
  Reader reader{folder.database()};
  Outside outside{folder.database()};
};

}  // namespace

TEST_CASE("an alert is read back as it was written, with its events and messages") {
  Bench bench;
  AlertRow row = active(1);
  row.load = 7;
  row.subject = "pinion";
  row.advice = "Look at the probe.";
  row.clearing_us = 1'500;
  row.times = 3;
  row.escalated = 2;
  row.escalated_us = 1'700;
  row.acknowledged_us = 1'100;
  row.acknowledged_by = "Night shift";
  row.shelved_until_us = 9'000;
  row.shelved_by = "Supervisor";
  row.shelved_reason = "known";
  AlertWrite write = raised(1);
  write.rows = {row};
  write.audits = {by("Supervisor", "shelve alert")};
  bench.store.save_alerts(write);
  CHECK(bench.reader.alert(1) == row);
  CHECK_FALSE(bench.reader.alert(2).has_value());
  REQUIRE(bench.reader.alert_events(1).size() == 1);
  CHECK(bench.reader.alert_events(1)[0].text == "at last");
  REQUIRE(bench.reader.deliveries(1).size() == 1);
  CHECK(bench.reader.deliveries(1)[0].payload_json == "{\"key\":\"1-raised-phone\"}");
  CHECK(bench.reader.audit("", 10).size() == 1);
  row.shelved_until_us.reset();
  row.state = AlertState::resting;
  row.cleared_us = 3'000;
  bench.store.save_alerts({.rows = {row}, .removed = {}, .events = {}, .outbox = {}, .audits = {}});
  CHECK(bench.reader.alert(1) == row);
}

TEST_CASE("state, events and messages are stored together or not at all") {
  Bench bench;
  bench.store.save_alerts(raised(1));
  AlertWrite write = raised(2, "clock|||");
  write.outbox.push_back(message(2, "1-raised-phone"));  // a key that another message has
  CHECK(fault_of([&] { bench.store.save_alerts(write); }) == StorageFault::misuse);
  CHECK_FALSE(bench.reader.alert(2).has_value());
  CHECK(bench.reader.alert_events(2).empty());
  CHECK(bench.reader.outbox_due(9'000, 10).size() == 1);
}

TEST_CASE("a condition has one alert that is not cleared; after it, the same condition is a new one") {
  Bench bench;
  bench.store.save_alerts(raised(1));
  CHECK(fault_of([&] { bench.store.save_alerts(raised(2)); }) == StorageFault::misuse);
  AlertWrite over;
  over.rows = {cleared(1), active(2)};
  bench.store.save_alerts(over);
  CHECK(bench.reader.open_alerts().at(0).id == 2);
}

TEST_CASE("a past alert takes notes and is changed in nothing else") {
  Bench bench;
  AlertWrite past = raised(1);
  past.rows = {cleared(1)};
  bench.store.save_alerts(past);
  AlertRow changed = cleared(1);
  changed.sentence = "Nothing happened.";
  CHECK(fault_of([&] {
          bench.store.save_alerts(
              {.rows = {changed}, .removed = {}, .events = {}, .outbox = {}, .audits = {}});
        }) == StorageFault::misuse);
  AlertWrite note;
  note.events = {
      {.alert = 1, .at_us = 5'000, .person = "Supervisor", .what = "note", .text = "probe was out"}};
  bench.store.save_alerts(note);
  CHECK(bench.reader.alert_events(1).size() == 2);
  CHECK(bench.reader.alert(1)->sentence == cleared(1).sentence);
  for (const char* sql :
       {"UPDATE alert SET sentence = ''", "DELETE FROM alert", "UPDATE alert_event SET text = ''",
        "DELETE FROM alert_event", "UPDATE outbox SET payload_json = ''", "DELETE FROM outbox"})
    CHECK_MESSAGE(contains(bench.outside.failure(sql), "never"), sql);
}

TEST_CASE("an open alert never becomes one about another condition") {
  Bench bench;
  bench.store.save_alerts(raised(1));
  CHECK(contains(bench.outside.failure("UPDATE alert SET key = 'other'"), "same condition"));
  CHECK(contains(bench.outside.failure("UPDATE alert SET load = 3"), "same condition"));
}

TEST_CASE("what waits survives a restart and may be taken back; its number is not given again") {
  Folder folder;
  {
    Store store(at(folder.database()));
    CHECK(Reader(folder.database()).next_alert_id() == 1);
    store.save_alerts({.rows = {waiting(1)}, .removed = {}, .events = {}, .outbox = {}, .audits = {}});
  }
  Store store(at(folder.database()));
  Reader reader(folder.database());
  REQUIRE(reader.open_alerts().size() == 1);
  CHECK(reader.open_alerts()[0] == waiting(1));
  CHECK(reader.alerts({}).empty());  // it was never raised
  store.save_alerts({.rows = {}, .removed = {1}, .events = {}, .outbox = {}, .audits = {}});
  CHECK(reader.open_alerts().empty());
  CHECK(reader.next_alert_id() == 2);
  store.save_alerts(raised(2));
  CHECK(fault_of([&] {
          store.save_alerts({.rows = {}, .removed = {2}, .events = {}, .outbox = {}, .audits = {}});
        }) == StorageFault::misuse);
}

TEST_CASE("alerts are found by state, furnace and load, in pages") {
  Bench bench;
  AlertWrite write;
  for (std::int64_t id = 1; id <= 6; ++id) {
    AlertRow row = id % 2 == 0 ? active(id, "key" + std::to_string(id)) : cleared(id, "key");
    row.load = id > 4 ? 9 : 0;
    row.furnace = id == 6 ? "pit-3" : "pit-2";
    write.rows.push_back(row);
  }
  bench.store.save_alerts(write);
  const auto ids = [&](const AlertFilter& filter) {
    std::vector<std::int64_t> found;
    for (const AlertRow& row : bench.reader.alerts(filter)) found.push_back(row.id);
    return found;
  };
  AlertFilter filter;
  CHECK(ids(filter) == std::vector<std::int64_t>{6, 5, 4, 3, 2, 1});
  filter.past = false;
  CHECK(ids(filter) == std::vector<std::int64_t>{6, 4, 2});
  filter.past = true;
  CHECK(ids(filter) == std::vector<std::int64_t>{5, 3, 1});
  filter.limit = 2;
  filter.before_id = 5;
  CHECK(ids(filter) == std::vector<std::int64_t>{3, 1});
  AlertFilter on_load;
  on_load.load = 9;
  CHECK(ids(on_load) == std::vector<std::int64_t>{6, 5});
  on_load.furnace = "pit-3";
  CHECK(ids(on_load) == std::vector<std::int64_t>{6});
  on_load.limit = 0;
  CHECK(fault_of([&] { ids(on_load); }) == StorageFault::misuse);
}

TEST_CASE("messages are due in order, are noted, get stuck, and are tried again") {
  Bench bench;
  CHECK_FALSE(bench.reader.outbox_next_us().has_value());
  AlertWrite write = raised(1);
  write.outbox = {message(1, "a", "phone", 3'000), message(1, "b", "phone", 2'000),
                  message(1, "c", "mail", 2'500)};
  bench.store.save_alerts(write);
  CHECK(bench.reader.outbox_next_us() == 2'000);
  CHECK(bench.reader.outbox_due(1'999, 10).empty());
  const auto due = bench.reader.outbox_due(3'000, 10);
  REQUIRE(due.size() == 3);
  CHECK(due[0].key == "b");
  CHECK(due[2].key == "a");
  CHECK(bench.reader.outbox_due(3'000, 1).size() == 1);

  using enum DeliveryState;
  bench.store.note_delivery({due[0].id, stuck, 9, 2'000, {}, "refused"});
  bench.store.note_delivery({due[1].id, delivered, 1, 2'500, 2'600, ""});
  bench.store.note_delivery({due[2].id, waiting, 1, 8'000, {}, "no answer"});
  CHECK(bench.reader.outbox_due(7'999, 10).empty());
  const DeliveryCounts counts = bench.reader.delivery_counts(1);
  CHECK(counts.waiting == 1);
  CHECK(counts.delivered == 1);
  CHECK(counts.stuck == 1);
  const auto targets = bench.reader.targets();
  REQUIRE(targets.size() == 2);
  CHECK(targets[0].target == "mail");
  CHECK(targets[0].last_delivered_us == 2'600);
  CHECK(targets[1].waiting == 1);
  CHECK(targets[1].stuck == 1);
  CHECK(targets[1].last_error == "refused");  // of the newer message

  CHECK(fault_of([&] {
          bench.store.note_delivery({due[1].id, waiting, 2, 0, {}, ""});
        }) == StorageFault::misuse);
  CHECK(fault_of([&] { bench.store.note_delivery({99, waiting, 2, 0, {}, ""}); }) == StorageFault::misuse);

  CHECK(bench.store.retry_stuck("mail", by("Supervisor", "retry messages", 4'000)) == 0);
  CHECK(bench.store.retry_stuck("phone", by("Supervisor", "retry messages", 4'000)) == 1);
  const auto again = bench.reader.outbox_due(4'000, 10);
  REQUIRE(again.size() == 1);
  CHECK(again[0].key == "b");
  CHECK(again[0].attempts == 0);
  CHECK(bench.reader.audit("", 10).size() == 2);
}
