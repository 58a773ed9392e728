// Start here: the front door of storage. One SQLite file, one writer thread that owns the only write
// connection and all checkpoints, read-only connections for everyone else.
//
// Threads: all methods of Store may be called from any thread. Writing calls block until their group is
// committed and synced, or throw StorageError; a call that returned is durable. A Reader belongs to one
// thread at a time. Times are integer microseconds since 1970-01-01 UTC.
#pragma once

#include <cstdint>
#include <functional>
#include <map>
#include <memory>
#include <optional>
#include <stdexcept>
#include <string>
#include <string_view>
#include <vector>

#include "storage/alert_records.h"
#include "storage/audit_row.h"

namespace hearthfront::storage {

// Why a store call failed. `unknown_fate`: a sync failed, what is on disk is unknown; the store then
// refuses all later writes (poisoned) and the process must restart to read back what is really there.
enum class StorageFault { busy, full, io, corrupt, unknown_fate, newer_schema, locked, misuse, closing };

class StorageError : public std::runtime_error {
 public:
  StorageError(StorageFault kind, const std::string& what) : std::runtime_error(what), fault(kind) {}
  StorageFault fault;
};

struct Reading {
  std::int64_t channel = 0;  // id from register_channel
  std::int64_t time_us = 0;
  double value = 0;  // finite; -0.0 is stored as 0.0
};

// How one reading of a batch was taken. conflict: another value is already stored for the same channel
// and time; both are kept and neither may enter the model until a person chooses (design: order of
// arrival must not matter).
enum class Taken : std::uint8_t { stored, duplicate, conflict };

// The texts are kept as they came, cut to 200 bytes at a character boundary; they need not be valid UTF-8.
struct RefusedReading {
  std::int64_t received_us = 0;
  std::string furnace, channel, time_text, value_text;
  std::string reason;  // short stable words, e.g. "future time"
};

// Counted for ever, also after the row itself made room for newer ones. Names that belong to no registered
// channel are counted one by one up to a bound, then together as furnace and channel "(other)".
struct RefusedCount {
  std::string furnace, channel, reason;
  std::int64_t count = 0;
};

struct LoadRow {
  std::int64_t id = 0;
  std::string name, furnace, chamber, person;
  std::int64_t started_us = 0;
  std::optional<std::int64_t> ended_us;
  std::int64_t created_us = 0;
  std::int64_t revision = 1;
  std::string definition_json;  // complete copy: steels, furnace settings, model version
  bool cancelled = false;       // was never treated: it has an end, no stays and no result
};

// Where a load was: from `from_us` up to, but not at, `to_us` (none = still). A chamber takes `places` loads
// at a time: one, or the tray positions of a pusher zone.
struct Stay {
  std::string furnace, chamber;
  std::int64_t from_us = 0;
  std::optional<std::int64_t> to_us;
  std::int64_t places = 1;
};

// One changed load: what `row` says from now on (its id names the load; person and created_us stay as they
// are), with the revision it was read at.
struct LoadChange {
  std::int64_t expected_revision = 0;
  LoadRow row;
  std::vector<Stay> stays;
};

// A load that is on a furnace and has no end there yet.
struct LoadOn {
  std::int64_t load = 0, revision = 0;
  bool operator==(const LoadOn&) const = default;
};

// What a change of a pusher line was worked out from. Between that look and the change others may push the
// line, or put loads on it; then the change would miss a push, or the push a load.
struct LineSeen {
  std::string furnace;
  std::optional<std::int64_t> last_push_us;
  std::optional<std::vector<LoadOn>> loads;  // empty: it does not matter who is there
};

// A pusher line moved on by one tray.
struct PushRow {
  std::string furnace;
  std::int64_t at_us = 0;
  std::string person, source;  // source: "person", "signal"
};

// One version of an entry of the library: a part, a recipe, the columns of a logger file ...
struct LibraryRow {
  std::string kind, key;
  std::int64_t version = 0, at_us = 0;
  std::string person, name, json;
  bool retired = false;  // no longer offered; what loads copied of it stays
};

// Which of several values of one channel and time counts; none = none of them.
struct Choice {
  std::int64_t channel = 0, time_us = 0;
  std::optional<double> value;
  std::int64_t at_us = 0;
  std::string person;
};

struct Conflict {
  std::int64_t time_us = 0;
  std::vector<double> values;  // ascending
  std::optional<Choice> choice;
};

// A stretch in which a channel showed something else than the furnace, marked by a person: burn-off of a
// probe, air purge, calibration. Its readings stay; the model takes none of [from, to].
struct MaskRow {
  std::int64_t id = 0, channel = 0, from_us = 0, to_us = 0, at_us = 0;
  std::string person, reason;
  bool withdrawn = false;
};

// One step of a load's history; revision 1 is its creation. `what` is the action of the audit row.
struct LoadRevision {
  std::int64_t load = 0, revision = 0, at_us = 0;
  std::string person, what, definition_before, definition_after;
  std::optional<std::int64_t> ended_before_us, ended_after_us;
};

struct LoadNote {
  std::int64_t id = 0, load = 0, at_us = 0;
  std::string person, text;
};

struct ResultRow {
  std::int64_t load = 0, revision = 0, computed_us = 0;
  std::string model_version, result_json;
  bool superseded = false;
};

struct ChannelCounts {
  std::int64_t stored = 0;     // rows
  std::int64_t conflicts = 0;  // times with two or more values
  std::int64_t chosen = 0;     // of these, where a person chose
  std::map<std::string, std::int64_t> refused;
  std::optional<Reading> last;  // newest accepted one: a time in conflict has no value to show
};

// Which rows became new since it was last taken: for each channel the span of changed times. Coalescing,
// so it is bounded by the number of channels and a slow follower loses nothing.
struct ChangedSpan {
  std::int64_t channel = 0, from_us = 0, to_us = 0;
};

// Read-only view. Each call is one short read transaction. `limit` must be 1 or more. Throws StorageError:
// io (file missing, replaced or unreadable), newer_schema, corrupt, busy, misuse.
class Reader {
 public:
  // Opens an existing, migrated file; the Store creates it.
  explicit Reader(const std::string& path);
  ~Reader();
  Reader(const Reader&) = delete;
  Reader& operator=(const Reader&) = delete;

  // Accepted readings in [from, to], ascending; a time with two different values is left out until a person
  // chose one.
  std::vector<Reading> accepted(std::int64_t channel, std::int64_t from_us, std::int64_t to_us);
  // The newest accepted reading at or before `at_us`.
  std::optional<Reading> newest(std::int64_t channel, std::int64_t at_us);
  ChannelCounts counts(std::int64_t channel);
  std::vector<Conflict> conflicts(std::int64_t channel, std::int64_t from_us, std::int64_t to_us,
                                  int limit);                                                  // newest first
  std::vector<MaskRow> masks(std::int64_t channel, std::int64_t from_us, std::int64_t to_us);  // oldest first
  std::optional<LoadRow> load(std::int64_t id);
  // Newest first; pages by id: rows with id < `before_id` (0 = from the newest). Filters empty = all; a load
  // counts for every furnace it was in.
  std::vector<LoadRow> loads(std::string_view furnace, std::optional<bool> open, std::int64_t before_id,
                             int limit);
  std::vector<LoadRow> open_loads();                       // oldest first
  std::vector<LoadOn> loads_on(std::string_view furnace);  // oldest first
  std::vector<Stay> stays(std::int64_t load);              // oldest first
  std::vector<PushRow> pushes(std::string_view furnace, std::int64_t from_us, std::int64_t to_us);
  std::optional<PushRow> last_push(std::string_view furnace, std::string_view source);  // empty = any source
  // Newest version of each entry that is not retired, by name.
  std::vector<LibraryRow> library(std::string_view kind);
  std::optional<LibraryRow> library_item(std::string_view kind, std::string_view key,
                                         std::int64_t version = 0);                       // 0 = newest
  std::vector<LibraryRow> library_versions(std::string_view kind, std::string_view key);  // oldest first
  // Ended loads to which a reading of a furnace in [from, to] can matter, oldest first: they came into it
  // by `to`, and had not ended before `from`. Those that had moved on by then are among them: the reading
  // after a move says where the line from the one before it led.
  std::vector<LoadRow> ended_touching(std::string_view furnace, std::int64_t from_us, std::int64_t to_us);
  std::vector<LoadRow> ended_without_result();             // none for their present revision; oldest first
  std::vector<LoadRevision> revisions(std::int64_t load);  // oldest first
  std::vector<LoadNote> notes(std::int64_t load);          // oldest first
  std::optional<ResultRow> result(std::int64_t load);      // the newest not superseded
  std::vector<ResultRow> results(std::int64_t load);       // all, oldest first
  std::vector<RefusedReading> refused(std::string_view furnace, int limit);  // newest first
  std::vector<RefusedCount> refused_counts(std::string_view furnace);        // empty = every furnace
  std::vector<AuditRow> audit(std::string_view subject, int limit);          // newest first

  std::vector<AlertRow> open_alerts();               // all but the cleared ones, oldest first
  std::vector<AlertRow> alerts(const AlertFilter&);  // those that were raised, newest first
  std::optional<AlertRow> alert(std::int64_t id);
  std::int64_t next_alert_id();                                       // above every number ever given
  std::vector<AlertEvent> alert_events(std::int64_t alert);           // oldest first
  std::vector<OutboxRow> outbox_due(std::int64_t now_us, int limit);  // waiting, next try due; oldest first
  // When the next waiting message is due; none where none waits.
  std::optional<std::int64_t> outbox_next_us();
  std::vector<OutboxRow> deliveries(std::int64_t alert);  // oldest first
  DeliveryCounts delivery_counts(std::int64_t alert);
  std::vector<TargetState> targets();  // those that ever had a message, by name

 private:
  class Impl;
  std::unique_ptr<Impl> impl_;
};

struct StoreOptions {
  std::string path;
  std::size_t queue_readings = 50'000;  // waiting readings; above this append throws busy at once
  bool check_integrity_after_crash = true;
  // Of the database file; the write-ahead file comes on top. 0 = no limit, else writes that need more fail
  // as `full`.
  std::int64_t max_file_bytes = 0;
};

struct StoreCounters {
  std::uint64_t commits = 0, readings_stored = 0, readings_duplicate = 0, readings_conflict = 0;
  std::size_t queued_readings = 0, queued_jobs = 0;  // waiting; a job is one call of a writing method
  std::int64_t wal_bytes = 0;                        // size of the write-ahead file on disk
  std::uint64_t checkpoint_failures = 0;             // nothing is lost by one, but the write-ahead file grows
  bool poisoned = false;
};

class Store {
 public:
  // Opens or creates; takes an exclusive lock against a second daemon on the same file; migrates; reads
  // back journal_mode and synchronous. Throws StorageError with what to do.
  explicit Store(StoreOptions options);
  ~Store();  // drains the queue, checkpoints, closes
  Store(const Store&) = delete;
  Store& operator=(const Store&) = delete;

  // The channel's id, stable for ever. Names are 1 to 200 bytes, else misuse.
  std::int64_t register_channel(std::string_view furnace, std::string_view channel);
  // One entry of Taken for each reading, in order. Duplicates inside one batch are seen as such. A batch is
  // stored whole or not at all. misuse: a value that is not finite, an unknown channel, a batch larger
  // than the queue.
  std::vector<Taken> append(std::vector<Reading> readings, std::vector<RefusedReading> refused);

  // Without stays the load is in its furnace and chamber from start to end. Fails with misuse where more
  // loads would be in a chamber at a time than it has places. `id` and `revision` of `row` are ignored;
  // created_us 0 and an empty audit subject are filled in: the audit's time, and "load <id>".
  std::int64_t create_load(LoadRow row, AuditRow audit);
  // With `seen`: misuse where the line is no longer as it was seen; look again and repeat.
  std::int64_t create_load(LoadRow row, std::vector<Stay> stays, AuditRow audit,
                           std::optional<LineSeen> seen = std::nullopt);
  // A dated revision; revision + 1. An empty `definition_json` keeps the stored one; `ended_us` is the end
  // from now on (none = the load is open). Fails with misuse on a wrong `expected_revision` and on overlap.
  void revise_load(std::int64_t id, std::int64_t expected_revision, std::string definition_json,
                   std::optional<std::int64_t> ended_us, AuditRow audit);
  // All or none, in one transaction; `audits` has one row for each change, and `push` is kept with them.
  // Fails with misuse as above, where there is nothing to change and no push, and where the furnace was
  // already pushed at that time.
  void revise_loads(std::vector<LoadChange> changes, std::vector<AuditRow> audits,
                    std::optional<PushRow> push = std::nullopt, std::optional<LineSeen> seen = std::nullopt);
  std::int64_t add_note(LoadNote note);
  // A new version of a library entry; returns its number. misuse: `expected_version` is not the newest (0 =
  // there is none yet).
  std::int64_t save_library(LibraryRow row, std::int64_t expected_version, AuditRow audit);
  // One value for each conflicting time, in place of an earlier choice. misuse: that channel has no such
  // value at that time.
  void choose(std::vector<Choice> choices, AuditRow audit);
  std::int64_t add_mask(MaskRow row, AuditRow audit);
  void withdraw_mask(std::int64_t id, AuditRow audit);  // misuse: no such mask, or withdrawn already
  void save_result(ResultRow row);                      // marks earlier results of the load as superseded
  void add_audit(AuditRow row);                         // a change that is not a load's

  // All of it in one transaction: an alert is never raised without its messages, nor told without being
  // stored. A row whose id is not there yet is new. misuse: another open alert has its key, it is past, or
  // has no number; and an outbox key that is there already.
  void save_alerts(AlertWrite write);
  // How a try went. misuse: no such message, or it was delivered already.
  void note_delivery(DeliveryNote note);
  // Messages of the target that were given up are due again at the audit's time; returns how many. Their
  // count of attempts starts anew.
  std::int64_t retry_stuck(std::string_view target, AuditRow audit);

  std::vector<ChangedSpan> take_changes();
  // Called after each commit with new rows, on the writer thread with no lock held; set before writing
  // starts. `wake` must not throw and must not write to the store.
  void on_change(std::function<void()> wake);

  // Keys that begin with "store." are the store's own: misuse.
  void set_meta(std::string_view key, std::string_view value);
  std::optional<std::string> meta(std::string_view key);
  StoreCounters counters() const;
  const std::string& path() const;
  // Refuses new writes, stores what is queued, checkpoints, gives up the lock. Idempotent; writing calls
  // that come later throw `closing`.
  void close();

 private:
  class Impl;
  std::unique_ptr<Impl> impl_;
};

}  // namespace hearthfront::storage
