#include "storage/schema.h"

#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Database.h>
#include <SQLiteCpp/Exception.h>
#include <SQLiteCpp/Statement.h>

#include <array>
#include <string>

#include "storage/connection.h"

namespace hearthfront::storage {
namespace {

// Marks the file as ours (the bytes "HFDB"), for `file` and for refusing other programs' databases.
constexpr int application_id = 0x48464442;

constexpr const char* first_tables = R"sql(
CREATE TABLE migration(version INTEGER PRIMARY KEY, name TEXT NOT NULL) STRICT;

CREATE TABLE meta(key TEXT PRIMARY KEY, value TEXT NOT NULL) STRICT, WITHOUT ROWID;

-- stored and conflicts repeat what reading says, kept in the same transaction: counting millions of rows
-- for each page of the dashboard would be too slow.
CREATE TABLE channel(
  id INTEGER PRIMARY KEY AUTOINCREMENT,
  furnace TEXT NOT NULL, name TEXT NOT NULL,
  stored INTEGER NOT NULL DEFAULT 0, conflicts INTEGER NOT NULL DEFAULT 0,
  UNIQUE(furnace, name)) STRICT;

-- value is part of the key: two values for one time are two rows, whichever came first.
CREATE TABLE reading(
  channel INTEGER NOT NULL REFERENCES channel(id), time_us INTEGER NOT NULL, value REAL NOT NULL,
  PRIMARY KEY(channel, time_us, value)) STRICT, WITHOUT ROWID;

CREATE TABLE refused_reading(
  id INTEGER PRIMARY KEY AUTOINCREMENT, received_us INTEGER NOT NULL,
  furnace TEXT NOT NULL, channel TEXT NOT NULL, time_text TEXT NOT NULL, value_text TEXT NOT NULL,
  reason TEXT NOT NULL) STRICT;
CREATE INDEX refused_reading_furnace ON refused_reading(furnace, id);

CREATE TABLE refused_count(
  furnace TEXT NOT NULL, channel TEXT NOT NULL, reason TEXT NOT NULL, count INTEGER NOT NULL,
  PRIMARY KEY(furnace, channel, reason)) STRICT, WITHOUT ROWID;

CREATE TABLE load(
  id INTEGER PRIMARY KEY AUTOINCREMENT,
  name TEXT NOT NULL, furnace TEXT NOT NULL, chamber TEXT NOT NULL, person TEXT NOT NULL,
  started_us INTEGER NOT NULL, ended_us INTEGER CHECK(ended_us > started_us),
  created_us INTEGER NOT NULL, revision INTEGER NOT NULL, definition_json TEXT NOT NULL) STRICT;
CREATE INDEX load_chamber ON load(furnace, chamber, started_us);
CREATE INDEX load_open ON load(id) WHERE ended_us IS NULL;

CREATE TABLE load_revision(
  load INTEGER NOT NULL REFERENCES load(id), revision INTEGER NOT NULL, at_us INTEGER NOT NULL,
  person TEXT NOT NULL, what TEXT NOT NULL,
  definition_before TEXT NOT NULL, definition_after TEXT NOT NULL,
  ended_before_us INTEGER, ended_after_us INTEGER,
  PRIMARY KEY(load, revision)) STRICT, WITHOUT ROWID;

CREATE TABLE load_note(
  id INTEGER PRIMARY KEY AUTOINCREMENT, load INTEGER NOT NULL REFERENCES load(id),
  at_us INTEGER NOT NULL, person TEXT NOT NULL, text TEXT NOT NULL) STRICT;
CREATE INDEX load_note_load ON load_note(load, id);

CREATE TABLE result(
  id INTEGER PRIMARY KEY AUTOINCREMENT, load INTEGER NOT NULL REFERENCES load(id),
  revision INTEGER NOT NULL, computed_us INTEGER NOT NULL, model_version TEXT NOT NULL,
  result_json TEXT NOT NULL, superseded INTEGER NOT NULL DEFAULT 0 CHECK(superseded IN (0, 1))) STRICT;
CREATE INDEX result_load ON result(load, id);

CREATE TABLE audit(
  id INTEGER PRIMARY KEY AUTOINCREMENT, at_us INTEGER NOT NULL, person TEXT NOT NULL,
  action TEXT NOT NULL, subject TEXT NOT NULL, before_json TEXT NOT NULL, after_json TEXT NOT NULL) STRICT;
CREATE INDEX audit_subject ON audit(subject, id);

-- Nothing past is rewritten, by this program or by a hand in the file.
CREATE TRIGGER reading_no_update BEFORE UPDATE ON reading BEGIN SELECT RAISE(ABORT, 'readings are never changed'); END;
CREATE TRIGGER reading_no_delete BEFORE DELETE ON reading BEGIN SELECT RAISE(ABORT, 'readings are never deleted'); END;
CREATE TRIGGER audit_no_update BEFORE UPDATE ON audit BEGIN SELECT RAISE(ABORT, 'audit rows are never changed'); END;
CREATE TRIGGER audit_no_delete BEFORE DELETE ON audit BEGIN SELECT RAISE(ABORT, 'audit rows are never deleted'); END;
CREATE TRIGGER load_revision_no_update BEFORE UPDATE ON load_revision
  BEGIN SELECT RAISE(ABORT, 'load revisions are never changed'); END;
CREATE TRIGGER load_revision_no_delete BEFORE DELETE ON load_revision
  BEGIN SELECT RAISE(ABORT, 'load revisions are never deleted'); END;
CREATE TRIGGER load_no_delete BEFORE DELETE ON load BEGIN SELECT RAISE(ABORT, 'loads are never deleted'); END;
CREATE TRIGGER load_note_no_update BEFORE UPDATE ON load_note BEGIN SELECT RAISE(ABORT, 'notes are never changed'); END;
CREATE TRIGGER load_note_no_delete BEFORE DELETE ON load_note BEGIN SELECT RAISE(ABORT, 'notes are never deleted'); END;
CREATE TRIGGER result_no_update BEFORE UPDATE OF id, load, revision, computed_us, model_version, result_json ON result
  BEGIN SELECT RAISE(ABORT, 'results are never changed'); END;
CREATE TRIGGER result_no_delete BEFORE DELETE ON result BEGIN SELECT RAISE(ABORT, 'results are never deleted'); END;

-- The store asks first and names the other load; these hold even if that question is ever forgotten.
CREATE TRIGGER load_no_overlap_insert BEFORE INSERT ON load WHEN EXISTS(
  SELECT 1 FROM load WHERE furnace = NEW.furnace AND chamber = NEW.chamber
    AND (NEW.ended_us IS NULL OR started_us < NEW.ended_us) AND (ended_us IS NULL OR ended_us > NEW.started_us))
  BEGIN SELECT RAISE(ABORT, 'another load is in this chamber at that time'); END;
CREATE TRIGGER load_no_overlap_update BEFORE UPDATE ON load WHEN EXISTS(
  SELECT 1 FROM load WHERE furnace = NEW.furnace AND chamber = NEW.chamber AND id <> NEW.id
    AND (NEW.ended_us IS NULL OR started_us < NEW.ended_us) AND (ended_us IS NULL OR ended_us > NEW.started_us))
  BEGIN SELECT RAISE(ABORT, 'another load is in this chamber at that time'); END;
)sql";

constexpr const char* moving_loads = R"sql(
-- What the definition says of a load's path, as a table, so that a chamber never holds more than it can.
CREATE TABLE load_stay(
  load INTEGER NOT NULL REFERENCES load(id), furnace TEXT NOT NULL, chamber TEXT NOT NULL,
  from_us INTEGER NOT NULL, to_us INTEGER CHECK(to_us > from_us), places INTEGER NOT NULL CHECK(places >= 1),
  PRIMARY KEY(load, from_us)) STRICT, WITHOUT ROWID;
CREATE INDEX load_stay_chamber ON load_stay(furnace, chamber, from_us);
INSERT INTO load_stay SELECT id, furnace, chamber, started_us, ended_us, 1 FROM load;
DROP TRIGGER load_no_overlap_insert;
DROP TRIGGER load_no_overlap_update;
CREATE TRIGGER load_stay_no_overlap BEFORE INSERT ON load_stay WHEN NEW.places = 1 AND EXISTS(
  SELECT 1 FROM load_stay WHERE furnace = NEW.furnace AND chamber = NEW.chamber AND load <> NEW.load
    AND (NEW.to_us IS NULL OR from_us < NEW.to_us) AND (to_us IS NULL OR to_us > NEW.from_us))
  BEGIN SELECT RAISE(ABORT, 'another load is in this chamber at that time'); END;
CREATE TRIGGER load_stay_no_update BEFORE UPDATE ON load_stay BEGIN SELECT RAISE(ABORT, 'stays are written anew'); END;

ALTER TABLE load ADD COLUMN cancelled INTEGER NOT NULL DEFAULT 0 CHECK(cancelled IN (0, 1));

CREATE TABLE push(
  furnace TEXT NOT NULL, at_us INTEGER NOT NULL, person TEXT NOT NULL, source TEXT NOT NULL,
  PRIMARY KEY(furnace, at_us)) STRICT, WITHOUT ROWID;

CREATE TABLE library(
  kind TEXT NOT NULL, key TEXT NOT NULL, version INTEGER NOT NULL, at_us INTEGER NOT NULL,
  person TEXT NOT NULL, name TEXT NOT NULL, json TEXT NOT NULL, retired INTEGER NOT NULL CHECK(retired IN (0, 1)),
  PRIMARY KEY(kind, key, version)) STRICT, WITHOUT ROWID;
CREATE TRIGGER library_no_update BEFORE UPDATE ON library BEGIN SELECT RAISE(ABORT, 'library versions are never changed'); END;
CREATE TRIGGER library_no_delete BEFORE DELETE ON library BEGIN SELECT RAISE(ABORT, 'library versions are never deleted'); END;

-- Earlier choices and withdrawn masks stay in the audit trail.
CREATE TABLE choice(
  channel INTEGER NOT NULL REFERENCES channel(id), time_us INTEGER NOT NULL, value REAL,
  at_us INTEGER NOT NULL, person TEXT NOT NULL, PRIMARY KEY(channel, time_us)) STRICT, WITHOUT ROWID;

CREATE TABLE mask(
  id INTEGER PRIMARY KEY AUTOINCREMENT, channel INTEGER NOT NULL REFERENCES channel(id),
  from_us INTEGER NOT NULL, to_us INTEGER NOT NULL CHECK(to_us > from_us), at_us INTEGER NOT NULL,
  person TEXT NOT NULL, reason TEXT NOT NULL, withdrawn INTEGER NOT NULL DEFAULT 0 CHECK(withdrawn IN (0, 1))) STRICT;
CREATE INDEX mask_channel ON mask(channel, from_us);
CREATE TRIGGER mask_no_delete BEFORE DELETE ON mask BEGIN SELECT RAISE(ABORT, 'masks are withdrawn, never deleted'); END;
)sql";

// A chamber is asked who is in it now, and readings which ended loads they still reach: neither may take
// longer the more past loads are stored, so both are found by when they end.
constexpr const char* ends_found = R"sql(
CREATE INDEX load_stay_end ON load_stay(furnace, chamber, coalesce(to_us, 9223372036854775807));
CREATE INDEX load_ended ON load(ended_us) WHERE ended_us IS NOT NULL;
DROP TRIGGER load_stay_no_overlap;
CREATE TRIGGER load_stay_no_overlap BEFORE INSERT ON load_stay WHEN NEW.places = 1 AND EXISTS(
  SELECT 1 FROM load_stay WHERE furnace = NEW.furnace AND chamber = NEW.chamber AND load <> NEW.load
    AND (NEW.to_us IS NULL OR from_us < NEW.to_us) AND coalesce(to_us, 9223372036854775807) > NEW.from_us)
  BEGIN SELECT RAISE(ABORT, 'another load is in this chamber at that time'); END;
)sql";

// Who or what reads the file later must be able to trust what was told to whom, so what a message said never
// changes, only how its sending went.
constexpr const char* alerts = R"sql(
CREATE TABLE alert(
  id INTEGER PRIMARY KEY AUTOINCREMENT, key TEXT NOT NULL, kind TEXT NOT NULL,
  severity TEXT NOT NULL CHECK(severity IN ('note', 'warning', 'urgent')),
  furnace TEXT NOT NULL, load INTEGER NOT NULL, subject TEXT NOT NULL,
  sentence TEXT NOT NULL, advice TEXT NOT NULL,
  state TEXT NOT NULL CHECK(state IN ('waiting', 'active', 'resting', 'cleared')),
  since_us INTEGER NOT NULL, raised_us INTEGER, last_seen_us INTEGER NOT NULL,
  clearing_us INTEGER, cleared_us INTEGER, times INTEGER NOT NULL,
  asking_us INTEGER NOT NULL, escalated INTEGER NOT NULL, escalated_us INTEGER NOT NULL,
  acknowledged_us INTEGER, acknowledged_by TEXT NOT NULL,
  shelved_until_us INTEGER, shelved_by TEXT NOT NULL, shelved_reason TEXT NOT NULL,
  CHECK(state = 'waiting' OR raised_us IS NOT NULL),
  CHECK((cleared_us IS NOT NULL) = (state IN ('resting', 'cleared')))) STRICT;
CREATE UNIQUE INDEX alert_open ON alert(key) WHERE state <> 'cleared';
CREATE INDEX alert_furnace ON alert(furnace, id);
CREATE INDEX alert_load ON alert(load, id);
CREATE TRIGGER alert_past BEFORE UPDATE ON alert WHEN OLD.state = 'cleared'
  BEGIN SELECT RAISE(ABORT, 'a past alert is never changed'); END;
CREATE TRIGGER alert_same BEFORE UPDATE ON alert
  WHEN NEW.id <> OLD.id OR NEW.key <> OLD.key OR NEW.kind <> OLD.kind OR NEW.furnace <> OLD.furnace
    OR NEW.load <> OLD.load OR NEW.subject <> OLD.subject
  BEGIN SELECT RAISE(ABORT, 'an alert stays about the same condition'); END;
CREATE TRIGGER alert_no_delete BEFORE DELETE ON alert WHEN OLD.state <> 'waiting'
  BEGIN SELECT RAISE(ABORT, 'alerts that were raised are never deleted'); END;

CREATE TABLE alert_event(
  id INTEGER PRIMARY KEY AUTOINCREMENT, alert INTEGER NOT NULL REFERENCES alert(id), at_us INTEGER NOT NULL,
  person TEXT NOT NULL, what TEXT NOT NULL, text TEXT NOT NULL) STRICT;
CREATE INDEX alert_event_alert ON alert_event(alert, id);
CREATE TRIGGER alert_event_no_update BEFORE UPDATE ON alert_event
  BEGIN SELECT RAISE(ABORT, 'events of alerts are never changed'); END;
CREATE TRIGGER alert_event_no_delete BEFORE DELETE ON alert_event
  BEGIN SELECT RAISE(ABORT, 'events of alerts are never deleted'); END;

CREATE TABLE outbox(
  id INTEGER PRIMARY KEY AUTOINCREMENT, alert INTEGER NOT NULL REFERENCES alert(id), created_us INTEGER NOT NULL,
  target TEXT NOT NULL, event TEXT NOT NULL, key TEXT NOT NULL UNIQUE, payload_json TEXT NOT NULL,
  state TEXT NOT NULL CHECK(state IN ('waiting', 'delivered', 'stuck', 'dropped')),
  attempts INTEGER NOT NULL, next_try_us INTEGER NOT NULL, delivered_us INTEGER, last_error TEXT NOT NULL,
  CHECK((delivered_us IS NOT NULL) = (state = 'delivered'))) STRICT;
CREATE INDEX outbox_alert ON outbox(alert, id);
CREATE INDEX outbox_target ON outbox(target);
CREATE INDEX outbox_due ON outbox(next_try_us, id) WHERE state = 'waiting';
CREATE INDEX outbox_left ON outbox(target, state) WHERE state IN ('waiting', 'stuck');
CREATE INDEX outbox_delivered ON outbox(target, delivered_us) WHERE state = 'delivered';
CREATE INDEX outbox_error ON outbox(target, id) WHERE last_error <> '';
CREATE TRIGGER outbox_same BEFORE UPDATE OF id, alert, created_us, target, event, key, payload_json ON outbox
  BEGIN SELECT RAISE(ABORT, 'what a message says is never changed'); END;
CREATE TRIGGER outbox_delivered_stays BEFORE UPDATE ON outbox WHEN OLD.state = 'delivered'
  BEGIN SELECT RAISE(ABORT, 'a delivered message is never changed'); END;
CREATE TRIGGER outbox_no_delete BEFORE DELETE ON outbox BEGIN SELECT RAISE(ABORT, 'messages are never deleted'); END;
)sql";

constexpr std::array<Migration, 4> all_migrations{{{1, "first tables", first_tables},
                                                   {2, "moving loads", moving_loads},
                                                   {3, "ends found", ends_found},
                                                   {4, "alerts", alerts}}};

int pragma_number(Connection& connection, const char* pragma) {
  return connection.database().execAndGet(pragma).getInt();
}

std::string newest_name(Connection& connection, int version) {
  SQLite::Statement query(connection.database(), "SELECT name FROM migration WHERE version = ?");
  query.bind(1, version);
  return query.executeStep() ? query.getColumn(0).getString() : std::string("unnamed");
}

}  // namespace

std::span<const Migration> migrations() {
  return all_migrations;
}

int schema_version(Connection& connection, std::span<const Migration> known) {
  const int version = pragma_number(connection, "PRAGMA user_version");
  const int id = pragma_number(connection, "PRAGMA application_id");
  const bool empty = pragma_number(connection, "SELECT count(*) FROM sqlite_master") == 0;
  if (empty && version == 0 && id == 0) return 0;
  if (id != application_id) {
    throw StorageError(StorageFault::misuse, "The file " + connection.path() +
                                                 " is a database of another program and stays untouched. "
                                                 "Name another file.");
  }
  const int newest = known.empty() ? 0 : known.back().version;
  if (version > newest) {
    throw StorageError(StorageFault::newer_schema,
                       "The database " + connection.path() + " has schema " + std::to_string(version) +
                           " \"" + newest_name(connection, version) +
                           "\" of a newer hearthfront; this one knows up to " + std::to_string(newest) +
                           ". Install the newer program, or restore the backup made before the upgrade.");
  }
  return version;
}

void migrate(Connection& connection, std::span<const Migration> known) {
  const int from = schema_version(connection, known);
  for (const Migration& step : known) {
    if (step.version <= from) continue;
    try {
      SQLite::Database& database = connection.database();
      database.exec("BEGIN IMMEDIATE");
      database.exec(step.sql);
      SQLite::Statement note(database, "INSERT INTO migration(version, name) VALUES(?, ?)");
      note.bind(1, step.version);
      note.bind(2, step.name);
      note.exec();
      note.reset();
      database.exec("PRAGMA application_id=" + std::to_string(application_id));
      database.exec("PRAGMA user_version=" + std::to_string(step.version));
      database.exec("COMMIT");
    } catch (const SQLite::Exception& error) {
      if (connection.in_transaction()) connection.database().exec("ROLLBACK");
      throw explain(error, connection.path(), "bring the tables to \"" + std::string(step.name) + "\"");
    }
  }
}

}  // namespace hearthfront::storage
