#include "storage/store.h"

#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Database.h>
#include <SQLiteCpp/Exception.h>
#include <SQLiteCpp/Statement.h>

#include <cmath>
#include <mutex>
#include <set>
#include <utility>

#include "storage/alerts.h"
#include "storage/connection.h"
#include "storage/files.h"
#include "storage/library.h"
#include "storage/loads.h"
#include "storage/schema.h"
#include "storage/stays.h"
#include "storage/writer.h"

namespace hearthfront::storage {
namespace {

constexpr std::size_t longest_name_bytes = 200;
constexpr std::string_view own_keys = "store.";
constexpr const char* shutdown_key = "store.shutdown";  // "open" while a store has the file, else "closed"

void put_meta(Connection& connection, const std::string& key, const std::string& value) {
  auto& put = connection.statement(
      "INSERT INTO meta(key, value) VALUES(?, ?) ON CONFLICT DO UPDATE SET value = excluded.value");
  put.bind(1, key);
  put.bind(2, value);
  put.exec();
}

std::optional<std::string> get_meta(Connection& connection, const std::string& key) {
  auto& query = connection.statement("SELECT value FROM meta WHERE key = ?");
  query.bind(1, key);
  std::optional<std::string> value;
  if (query.executeStep()) value = query.getColumn(0).getString();
  query.tryReset();
  return value;
}

void check_integrity(Connection& connection) {
  SQLite::Statement check(connection.database(), "PRAGMA quick_check(3)");
  std::string found;
  while (check.executeStep()) found += (found.empty() ? "" : "; ") + check.getColumn(0).getString();
  if (found == "ok") return;
  connection.keep_wal_at_close();
  throw StorageError(StorageFault::corrupt, "The database " + connection.path() +
                                                " was not closed properly and is damaged: " + found +
                                                ". Keep a copy of it and restore the newest backup.");
}

std::unique_ptr<Connection> open_for_writing(const std::string& path, const StoreOptions& options) {
  auto connection = std::make_unique<Connection>(path, Connection::Role::writer, options.max_file_bytes);
  try {
    const bool fresh = schema_version(*connection) == 0;
    const bool crashed = !fresh && get_meta(*connection, shutdown_key) == "open";
    if (crashed && options.check_integrity_after_crash) check_integrity(*connection);
    migrate(*connection);
    put_meta(*connection, shutdown_key, "open");
    connection->reset_statements();
  } catch (const SQLite::Exception& error) {
    throw explain(error, path, "open the database");
  }
  return connection;
}

void check_name(std::string_view what, std::string_view name) {
  if (!name.empty() && name.size() <= longest_name_bytes) return;
  throw StorageError(StorageFault::misuse, "The name of a " + std::string(what) + " must have 1 to " +
                                               std::to_string(longest_name_bytes) + " bytes; this one has " +
                                               std::to_string(name.size()) + ".");
}

}  // namespace

class Store::Impl {
 public:
  explicit Impl(StoreOptions options)
      : options_(std::move(options)),
        path_(canonical_path(options_.path)),
        lock_(std::make_unique<FileLock>(path_)),
        writer_(open_for_writing(path_, options_), options_.queue_readings,
                [](Tables& tables) { put_meta(tables.connection, shutdown_key, "closed"); }),
        meta_reader_(std::make_unique<Connection>(path_, Connection::Role::reader)) {
    load_channels();
  }

  void check_readings(const std::vector<Reading>& readings) {
    const std::lock_guard lock(channels_mutex_);
    for (const Reading& reading : readings) {
      if (!std::isfinite(reading.value)) {
        throw StorageError(StorageFault::misuse, "A reading of channel " + std::to_string(reading.channel) +
                                                     " is no finite number. Refuse it before the store.");
      }
      if (!channel_ids_.contains(reading.channel)) {
        throw StorageError(StorageFault::misuse,
                           "Channel " + std::to_string(reading.channel) +
                               " is not registered. Register it before storing readings.");
      }
    }
  }

  std::optional<std::int64_t> known_channel(const std::pair<std::string, std::string>& name) {
    const std::lock_guard lock(channels_mutex_);
    const auto found = channels_.find(name);
    if (found == channels_.end()) return std::nullopt;
    return found->second;
  }

  void remember_channel(std::pair<std::string, std::string> name, std::int64_t id) {
    const std::lock_guard lock(channels_mutex_);
    channels_.emplace(std::move(name), id);
    channel_ids_.insert(id);
  }

  std::optional<std::string> meta(std::string_view key) {
    const std::lock_guard lock(meta_mutex_);
    if (!meta_reader_)
      throw StorageError(StorageFault::closing, "The store is closed. Open it again to read.");
    try {
      return get_meta(*meta_reader_, std::string(key));
    } catch (const SQLite::Exception& error) {
      throw explain(error, path_, "read the setting " + std::string(key));
    }
  }

  void close() {
    const std::lock_guard closing(close_mutex_);
    {
      // The writer closes last: its final checkpoint must meet no reader of our own.
      const std::lock_guard lock(meta_mutex_);
      meta_reader_.reset();
    }
    writer_.close();
    lock_.reset();
  }

  const StoreOptions& options() const { return options_; }
  Writer& writer() { return writer_; }

 private:
  void load_channels() {
    try {
      SQLite::Statement query(meta_reader_->database(), "SELECT id, furnace, name FROM channel");
      while (query.executeStep()) {
        remember_channel({query.getColumn(1).getString(), query.getColumn(2).getString()},
                         query.getColumn(0).getInt64());
      }
    } catch (const SQLite::Exception& error) {
      throw explain(error, path_, "read the channels");
    }
  }

  const StoreOptions options_;
  const std::string path_;
  std::unique_ptr<FileLock> lock_;  // before the writer, so that it is given up after it
  Writer writer_;

  std::mutex meta_mutex_;
  std::unique_ptr<Connection> meta_reader_;

  std::mutex channels_mutex_;
  std::map<std::pair<std::string, std::string>, std::int64_t> channels_;
  std::set<std::int64_t> channel_ids_;

  std::mutex close_mutex_;
};

Store::Store(StoreOptions options) : impl_(std::make_unique<Impl>(std::move(options))) {}

Store::~Store() {
  impl_->close();
}

std::int64_t Store::register_channel(std::string_view furnace, std::string_view channel) {
  check_name("furnace", furnace);
  check_name("channel", channel);
  const std::pair name{std::string(furnace), std::string(channel)};
  if (const auto known = impl_->known_channel(name)) return *known;
  std::int64_t id = 0;
  impl_->writer().run(0, Writer::Kind::fallible, [&](Tables& tables) {
    auto& insert =
        tables.connection.statement("INSERT INTO channel(furnace, name) VALUES(?, ?) ON CONFLICT DO NOTHING");
    insert.bind(1, name.first);
    insert.bind(2, name.second);
    insert.exec();
    auto& query = tables.connection.statement("SELECT id FROM channel WHERE furnace = ? AND name = ?");
    query.bind(1, name.first);
    query.bind(2, name.second);
    query.executeStep();
    id = query.getColumn(0).getInt64();
    query.tryReset();
  });
  impl_->remember_channel(name, id);
  return id;
}

std::vector<Taken> Store::append(std::vector<Reading> readings, std::vector<RefusedReading> refused) {
  if (readings.empty() && refused.empty()) return {};
  impl_->check_readings(readings);
  std::vector<Taken> taken;
  impl_->writer().run(readings.size() + refused.size(), Writer::Kind::certain, [&](Tables& tables) {
    taken = tables.readings.append(readings);
    tables.readings.refuse(refused);
  });
  return taken;
}

std::int64_t Store::create_load(LoadRow row, AuditRow audit) {
  return create_load(std::move(row), {}, std::move(audit));
}

std::int64_t Store::create_load(LoadRow row, std::vector<Stay> stays, AuditRow audit,
                                std::optional<LineSeen> seen) {
  check_name("load", row.name);
  check_name("furnace", row.furnace);
  std::int64_t id = 0;
  impl_->writer().run(0, Writer::Kind::fallible, [&](Tables& tables) {
    if (seen) refuse_unseen(tables.connection, *seen);
    id = insert_load(tables.connection, row, stays, audit);
  });
  return id;
}

void Store::revise_loads(std::vector<LoadChange> changes, std::vector<AuditRow> audits,
                         std::optional<PushRow> push, std::optional<LineSeen> seen) {
  for (const LoadChange& change : changes) {
    check_name("load", change.row.name);
    check_name("furnace", change.row.furnace);
  }
  impl_->writer().run(0, Writer::Kind::fallible, [&](Tables& tables) {
    if (seen) refuse_unseen(tables.connection, *seen);
    storage::revise_loads(tables.connection, changes, audits, push);
  });
}

std::int64_t Store::save_library(LibraryRow row, std::int64_t expected_version, AuditRow audit) {
  check_name("library kind", row.kind);
  check_name("library entry", row.key);
  std::int64_t version = 0;
  impl_->writer().run(0, Writer::Kind::fallible, [&](Tables& tables) {
    version = insert_library(tables, row, expected_version, audit);
  });
  return version;
}

void Store::choose(std::vector<Choice> choices, AuditRow audit) {
  impl_->writer().run(0, Writer::Kind::fallible,
                      [&](Tables& tables) { insert_choices(tables, choices, audit); });
}

std::int64_t Store::add_mask(MaskRow row, AuditRow audit) {
  std::int64_t id = 0;
  impl_->writer().run(0, Writer::Kind::fallible,
                      [&](Tables& tables) { id = insert_mask(tables, row, audit); });
  return id;
}

void Store::withdraw_mask(std::int64_t id, AuditRow audit) {
  impl_->writer().run(0, Writer::Kind::fallible,
                      [&](Tables& tables) { storage::withdraw_mask(tables, id, audit); });
}

void Store::revise_load(std::int64_t id, std::int64_t expected_revision, std::string definition_json,
                        std::optional<std::int64_t> ended_us, AuditRow audit) {
  impl_->writer().run(0, Writer::Kind::fallible, [&](Tables& tables) {
    storage::revise_load(tables.connection, id, expected_revision, definition_json, ended_us, audit);
  });
}

std::int64_t Store::add_note(LoadNote note) {
  std::int64_t id = 0;
  impl_->writer().run(0, Writer::Kind::fallible,
                      [&](Tables& tables) { id = insert_note(tables.connection, note); });
  return id;
}

void Store::save_result(ResultRow row) {
  impl_->writer().run(0, Writer::Kind::fallible,
                      [&](Tables& tables) { insert_result(tables.connection, row); });
}

void Store::add_audit(AuditRow row) {
  impl_->writer().run(0, Writer::Kind::fallible,
                      [&](Tables& tables) { insert_audit(tables.connection, row); });
}

void Store::save_alerts(AlertWrite write) {
  if (write.empty()) return;
  impl_->writer().run(0, Writer::Kind::fallible,
                      [&](Tables& tables) { storage::save_alerts(tables.connection, write); });
}

void Store::note_delivery(DeliveryNote note) {
  impl_->writer().run(0, Writer::Kind::fallible,
                      [&](Tables& tables) { storage::note_delivery(tables.connection, note); });
}

std::int64_t Store::retry_stuck(std::string_view target, AuditRow audit) {
  const std::string name(target);
  std::int64_t retried = 0;
  impl_->writer().run(0, Writer::Kind::fallible, [&](Tables& tables) {
    retried = storage::retry_stuck(tables.connection, name, audit);
  });
  return retried;
}

std::vector<ChangedSpan> Store::take_changes() {
  return impl_->writer().take_changes();
}

void Store::on_change(std::function<void()> wake) {
  impl_->writer().on_change(std::move(wake));
}

void Store::set_meta(std::string_view key, std::string_view value) {
  check_name("setting", key);
  if (key.starts_with(own_keys)) {
    throw StorageError(StorageFault::misuse,
                       "The setting " + std::string(key) + " is the store's own. Use another name.");
  }
  const std::string kept_key(key), kept_value(value);
  impl_->writer().run(0, Writer::Kind::fallible,
                      [&](Tables& tables) { put_meta(tables.connection, kept_key, kept_value); });
}

std::optional<std::string> Store::meta(std::string_view key) {
  return impl_->meta(key);
}

StoreCounters Store::counters() const {
  return impl_->writer().counters();
}

const std::string& Store::path() const {
  return impl_->options().path;
}

void Store::close() {
  impl_->close();
}

}  // namespace hearthfront::storage
