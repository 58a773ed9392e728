// One SQLite connection with the settings that durability rests on, set and read back, and its prepared
// statements; and the one place where an SQLite result code becomes a StorageError.
//
// Threads: a Connection belongs to one thread at a time. SQLite calls throw SQLite::Exception; whoever
// calls from outside this room sees them through `explain`.
#pragma once

#include <cstdint>
#include <memory>
#include <string>
#include <string_view>
#include <unordered_map>

#include "storage/store.h"

namespace SQLite {
class Database;
class Exception;
class Statement;
}  // namespace SQLite

namespace hearthfront::storage {

// `doing` completes "Cannot ...", e.g. "store readings".
StorageError explain(const SQLite::Exception& error, const std::string& path, std::string_view doing);

enum class CheckpointMode { passive, truncate };

// A failure is no reason to doubt commits: they are synced in the write-ahead file.
struct CheckpointOutcome {
  enum class Kind { done, held_up, failed, sync_failed } kind = Kind::done;  // held_up: by a reader
};

class Connection {
 public:
  enum class Role { writer, reader };
  // `path` canonical. max_file_bytes 0 = no limit. Throws StorageError.
  Connection(std::string path, Role role, std::int64_t max_file_bytes = 0);
  ~Connection();
  Connection(const Connection&) = delete;
  Connection& operator=(const Connection&) = delete;

  SQLite::Database& database() { return *database_; }
  const std::string& path() const { return path_; }
  // Prepared once, then reset and unbound at each call. `sql` must be a string literal: the cache is keyed
  // by its address.
  SQLite::Statement& statement(const char* sql);
  // Reads that are not reset keep their snapshot and hold up checkpoints.
  void reset_statements() noexcept;
  void run(const char* sql);  // a literal without parameters or rows
  bool in_transaction() const;
  std::int64_t last_row_id() const;
  int changes() const;
  // truncate waits up to `wait_ms` for readers.
  CheckpointOutcome checkpoint(CheckpointMode mode, int wait_ms);
  int wal_pages() const { return wal_pages_; }  // in the write-ahead file after the last commit
  // After a failed sync, the checkpoint that SQLite makes at the last close would overwrite the only copy.
  void keep_wal_at_close();

 private:
  std::string path_;
  int wal_pages_ = 0;
  std::unique_ptr<SQLite::Database> database_;
  std::unordered_map<const char*, std::unique_ptr<SQLite::Statement>> statements_;
};

}  // namespace hearthfront::storage
