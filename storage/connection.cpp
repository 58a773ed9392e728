#include "storage/connection.h"

#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Database.h>
#include <SQLiteCpp/Exception.h>
#include <SQLiteCpp/Statement.h>
#include <sqlite3.h>

#include <algorithm>

namespace hearthfront::storage {
namespace {

constexpr int busy_timeout_ms = 5000;  // longer than a backup's final pass holds the file
constexpr int full_synchronous = 2;    // SQLite's number for FULL

bool is_sync_failure(int extended) {
  return extended == SQLITE_IOERR_FSYNC || extended == SQLITE_IOERR_DIR_FSYNC;
}

StorageFault fault_of(int extended) {
  if (is_sync_failure(extended)) return StorageFault::unknown_fate;
  if (extended == SQLITE_IOERR_CORRUPTFS) return StorageFault::corrupt;
  switch (extended & 0xff) {
    case SQLITE_BUSY:
    case SQLITE_LOCKED:
      return StorageFault::busy;
    case SQLITE_FULL:
      return StorageFault::full;
    case SQLITE_CORRUPT:
    case SQLITE_NOTADB:
      return StorageFault::corrupt;
    case SQLITE_CONSTRAINT:
    case SQLITE_MISMATCH:
    case SQLITE_TOOBIG:
    case SQLITE_RANGE:
    case SQLITE_MISUSE:
      return StorageFault::misuse;
    default:
      return StorageFault::io;
  }
}

std::string_view advice(StorageFault fault) {
  switch (fault) {
    case StorageFault::busy:
      return "Another program holds the file (a copy or a database browser?); close it, then send again.";
    case StorageFault::full:
      return "Nothing of this was stored. Free disk space or raise the limit, then send again.";
    case StorageFault::corrupt:
      return "The file is damaged or no database. Stop, keep a copy of it, and restore the newest backup.";
    case StorageFault::unknown_fate:
      return "The disk did not confirm the write, so what it holds is unknown. Check the disk and restart.";
    case StorageFault::io:
      return "Nothing of this was stored. Check the disk, the folder and this user's permissions.";
    default:
      return "Nothing of this was stored.";
  }
}

void require(SQLite::Database& database, const char* pragma, const std::string& wanted,
             const std::string& path) {
  SQLite::Statement query(database, pragma);
  const std::string found = query.executeStep() ? query.getColumn(0).getString() : std::string("nothing");
  if (found != wanted) {
    throw StorageError(StorageFault::io, "The database " + path + " answers " + found + " to " + pragma +
                                             " where " + wanted +
                                             " is needed to keep acknowledged readings. "
                                             "Keep it on a local disk, not on a network share.");
  }
}

void apply_settings(SQLite::Database& database, const std::string& path, bool writer) {
  database.exec("PRAGMA foreign_keys=ON; PRAGMA temp_store=MEMORY");
  if (writer) {
    // Pages of many channels are written in turn; SQLite's 2 MB default would read them back each time.
    database.exec("PRAGMA journal_mode=WAL; PRAGMA cache_size=-16384");
  }
  // FULL after WAL: the journal mode decides what the levels mean.
  database.exec("PRAGMA synchronous=FULL");
  // All checkpoints are explicit ones of the writer. SQLite's automatic ones swallow a failed sync, and
  // two connections that checkpoint can meet the WAL-reset bug (sqlite.org/wal.html, "The WAL-Reset Bug").
  database.exec("PRAGMA wal_autocheckpoint=0");
  require(database, "PRAGMA journal_mode", "wal", path);
  require(database, "PRAGMA synchronous", std::to_string(full_synchronous), path);
  require(database, "PRAGMA foreign_keys", "1", path);
}

}  // namespace

StorageError explain(const SQLite::Exception& error, const std::string& path, std::string_view doing) {
  const int extended = error.getExtendedErrorCode() > 0 ? error.getExtendedErrorCode() : error.getErrorCode();
  const StorageFault fault = fault_of(extended);
  std::string text = "Cannot " + std::string(doing) + " in " + path + ": " + error.what() + " (SQLite " +
                     std::to_string(extended) + "). ";
  return {fault, text + std::string(advice(fault))};
}

Connection::Connection(std::string path, Role role, std::int64_t max_file_bytes) : path_(std::move(path)) {
  const bool writer = role == Role::writer;
  try {
    // One thread at a time uses a connection (store.h), so SQLite need not lock it at every call.
    const int flags = SQLite::OPEN_NOMUTEX |
                      (writer ? SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE : SQLite::OPEN_READONLY);
    database_ = std::make_unique<SQLite::Database>(path_, flags, busy_timeout_ms);
    // SQLite opens a write-protected file for reading without a word.
    if (writer && sqlite3_db_readonly(database_->getHandle(), "main") == 1) {
      throw StorageError(StorageFault::io, "The database file " + path_ +
                                               " is write-protected. Let this user write to the file and its "
                                               "folder, then start again.");
    }
    apply_settings(*database_, path_, writer);
    if (writer) {
      // After wal_autocheckpoint, which shares the hook's place.
      sqlite3_wal_hook(
          database_->getHandle(),
          [](void* pages, sqlite3*, const char*, int count) {
            *static_cast<int*>(pages) = count;
            return SQLITE_OK;
          },
          &wal_pages_);
    } else {
      keep_wal_at_close();
    }
    if (max_file_bytes > 0) {
      const int page_bytes = database_->execAndGet("PRAGMA page_size").getInt();
      const std::int64_t pages = std::max<std::int64_t>(1, max_file_bytes / page_bytes);
      database_->exec("PRAGMA max_page_count=" + std::to_string(pages));
    }
  } catch (const SQLite::Exception& error) {
    throw explain(error, path_, "open the database");
  }
}

Connection::~Connection() {
  statements_.clear();
}

SQLite::Statement& Connection::statement(const char* sql) {
  auto& slot = statements_[sql];
  if (!slot) {
    slot = std::make_unique<SQLite::Statement>(*database_, sql);
  } else {
    slot->tryReset();
    slot->clearBindings();
  }
  return *slot;
}

void Connection::reset_statements() noexcept {
  for (auto& [sql, statement] : statements_) {
    // The code of a reset repeats the failure that its last step already reported.
    statement->tryReset();
  }
}

void Connection::run(const char* sql) {
  SQLite::Statement& prepared = statement(sql);
  prepared.exec();
  prepared.tryReset();
}

bool Connection::in_transaction() const {
  return sqlite3_get_autocommit(database_->getHandle()) == 0;
}

std::int64_t Connection::last_row_id() const {
  return database_->getLastInsertRowid();
}

int Connection::changes() const {
  return database_->getChanges();
}

CheckpointOutcome Connection::checkpoint(CheckpointMode mode, int wait_ms) {
  const int sqlite_mode =
      mode == CheckpointMode::passive ? SQLITE_CHECKPOINT_PASSIVE : SQLITE_CHECKPOINT_TRUNCATE;
  sqlite3* handle = database_->getHandle();
  database_->setBusyTimeout(wait_ms);
  const int code = sqlite3_wal_checkpoint_v2(handle, "main", sqlite_mode, nullptr, nullptr);
  const int extended = code == SQLITE_OK ? SQLITE_OK : sqlite3_extended_errcode(handle);
  database_->setBusyTimeout(busy_timeout_ms);
  if (code == SQLITE_OK) return {CheckpointOutcome::Kind::done};
  if (is_sync_failure(extended)) return {CheckpointOutcome::Kind::sync_failed};
  return {code == SQLITE_BUSY ? CheckpointOutcome::Kind::held_up : CheckpointOutcome::Kind::failed};
}

void Connection::keep_wal_at_close() {
  sqlite3_db_config(database_->getHandle(), SQLITE_DBCONFIG_NO_CKPT_ON_CLOSE, 1, nullptr);
}

}  // namespace hearthfront::storage
