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

namespace hearthfront::storage {

// Why a store call failed. `unknown_fate`: a sync failed, what is on disk is unknown; the store then
// refuses all later writes (poisoned) and the process must restart to read back what is really there.
enum class StorageFault { busy, full, io, corrupt, unknown_fate, newer_schema, locked, misuse, closing };

class StorageError : public std::runtime_error {
 public:
  StorageError(StorageFault fault, const std::string& what) : std::runtime_error(what), fault(fault) {}
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

struct RefusedReading {
  std::int64_t received_us = 0;
  std::string furnace, channel, time_text, value_text;  // as they came, at most 200 bytes each
  std::string reason;                                   // short stable words, e.g. "future time"
};

struct LoadRow {
  std::int64_t id = 0;
  std::string name, furnace, chamber, person;
  std::int64_t started_us = 0;
  std::optional<std::int64_t> ended_us;
  std::int64_t created_us = 0;
  std::int64_t revision = 1;
  std::string definition_json;  // complete copy: steels, furnace settings, model version
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

struct AuditRow {
  std::int64_t at_us = 0;
  std::string person, action, subject, before_json, after_json;
};

struct ChannelCounts {
  std::int64_t stored = 0;     // rows
  std::int64_t conflicts = 0;  // times with two or more values
  std::map<std::string, std::int64_t> refused;
  std::optional<Reading> last;  // newest time
};

// Which rows became new since it was last taken: for each channel the span of changed times. Coalescing,
// so it is bounded by the number of channels and a slow follower loses nothing.
struct ChangedSpan {
  std::int64_t channel = 0, from_us = 0, to_us = 0;
};

// Read-only view. Each call is one short read transaction.
class Reader {
 public:
  explicit Reader(const std::string& path);
  ~Reader();
  Reader(const Reader&) = delete;
  Reader& operator=(const Reader&) = delete;

  // Accepted readings in [from, to], ascending; times with two different values are left out.
  std::vector<Reading> accepted(std::int64_t channel, std::int64_t from_us, std::int64_t to_us);
  // The newest accepted reading at or before `at_us`.
  std::optional<Reading> newest(std::int64_t channel, std::int64_t at_us);
  ChannelCounts counts(std::int64_t channel);
  std::optional<LoadRow> load(std::int64_t id);
  // Newest first; pages by id: rows with id < `before_id` (0 = from the newest). Filters empty = all.
  std::vector<LoadRow> loads(std::string_view furnace, std::optional<bool> open, std::int64_t before_id, int limit);
  std::vector<LoadRow> open_loads();
  std::vector<LoadNote> notes(std::int64_t load);
  std::optional<ResultRow> result(std::int64_t load);  // the newest not superseded
  std::vector<ResultRow> results(std::int64_t load);   // all, oldest first
  std::vector<RefusedReading> refused(std::string_view furnace, int limit);  // newest first
  std::vector<AuditRow> audit(std::string_view subject, int limit);          // newest first

 private:
  class Impl;
  std::unique_ptr<Impl> impl_;
};

struct StoreOptions {
  std::string path;
  std::size_t queue_readings = 50'000;  // above this append throws busy at once
  bool check_integrity_after_crash = true;
};

struct StoreCounters {
  std::uint64_t commits = 0, readings_stored = 0, readings_duplicate = 0, readings_conflict = 0;
  std::size_t queued_readings = 0;
  std::int64_t wal_bytes = 0;
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

  std::int64_t register_channel(std::string_view furnace, std::string_view channel);  // id, stable for ever
  // One entry of Taken for each reading, in order. Duplicates inside one batch are seen as such.
  std::vector<Taken> append(std::vector<Reading> readings, std::vector<RefusedReading> refused);

  // Fails with misuse where another load is open in that furnace and chamber at an overlapping time.
  std::int64_t create_load(LoadRow row, AuditRow audit);
  // A dated revision: new definition and/or end time; revision + 1. Fails with misuse on a wrong `expected_revision`.
  void revise_load(std::int64_t id, std::int64_t expected_revision, std::string definition_json,
                   std::optional<std::int64_t> ended_us, AuditRow audit);
  std::int64_t add_note(LoadNote note);
  void save_result(ResultRow row);  // marks earlier results of the load as superseded

  std::vector<ChangedSpan> take_changes();
  void on_change(std::function<void()> wake);  // called after each commit with new rows; set before writing starts

  void set_meta(std::string_view key, std::string_view value);
  std::optional<std::string> meta(std::string_view key);
  StoreCounters counters() const;
  const std::string& path() const;
  void close();  // idempotent

 private:
  class Impl;
  std::unique_ptr<Impl> impl_;
};

}  // namespace hearthfront::storage
