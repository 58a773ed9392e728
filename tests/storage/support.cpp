#include "storage/support.h"

#include <sqlite3.h>

#include <chrono>
#include <cstdlib>
#include <filesystem>
#include <stdexcept>
#include <thread>

namespace hearthfront::storage::test {

Folder::Folder() {
  std::string name = (std::filesystem::temp_directory_path() / "hearthfront-storage-XXXXXX").string();
  if (::mkdtemp(name.data()) == nullptr) throw std::runtime_error("no temporary folder");
  path_ = name;
}

Folder::~Folder() {
  std::error_code ignored;
  std::filesystem::remove_all(path_, ignored);
}

Outside::Outside(const std::string& path) {
  sqlite3* handle = nullptr;
  if (sqlite3_open_v2(path.c_str(), &handle, SQLITE_OPEN_READWRITE | SQLITE_OPEN_CREATE, nullptr) !=
      SQLITE_OK) {
    sqlite3_close(handle);
    throw std::runtime_error("cannot open " + path);
  }
  sqlite3_busy_timeout(handle, 5000);
  handle_ = handle;
}

Outside::~Outside() {
  sqlite3_close(static_cast<sqlite3*>(handle_));
}

std::string Outside::text(const std::string& sql) {
  auto* handle = static_cast<sqlite3*>(handle_);
  sqlite3_stmt* statement = nullptr;
  if (sqlite3_prepare_v2(handle, sql.c_str(), -1, &statement, nullptr) != SQLITE_OK) {
    throw std::runtime_error(sql + ": " + sqlite3_errmsg(handle));
  }
  std::string found;
  if (sqlite3_step(statement) == SQLITE_ROW) {
    const auto* bytes = static_cast<const char*>(sqlite3_column_blob(statement, 0));
    const auto size = static_cast<std::size_t>(sqlite3_column_bytes(statement, 0));
    if (bytes != nullptr) found.assign(bytes, size);
  }
  sqlite3_finalize(statement);
  return found;
}

std::int64_t Outside::number(const std::string& sql) {
  return std::stoll(text(sql));
}

std::string Outside::failure(const std::string& sql) {
  auto* handle = static_cast<sqlite3*>(handle_);
  return sqlite3_exec(handle, sql.c_str(), nullptr, nullptr, nullptr) == SQLITE_OK ? ""
                                                                                   : sqlite3_errmsg(handle);
}

StoreOptions at(const std::string& path) {
  StoreOptions options;
  options.path = path;
  return options;
}

std::vector<Reading> series(std::int64_t channel, std::int64_t from_us, int count, double value) {
  std::vector<Reading> readings;
  readings.reserve(static_cast<std::size_t>(count));
  for (int i = 0; i < count; ++i)
    readings.push_back({.channel = channel, .time_us = from_us + i, .value = value});
  return readings;
}

LoadRow load(const std::string& name, std::int64_t started_us, std::optional<std::int64_t> ended_us,
             const std::string& chamber, const std::string& furnace) {
  LoadRow row;
  row.name = name;
  row.furnace = furnace;
  row.chamber = chamber;
  row.person = "Morning shift";
  row.started_us = started_us;
  row.ended_us = ended_us;
  row.definition_json = "{\"name\":\"" + name + "\"}";
  return row;
}

AuditRow by(const std::string& person, const std::string& action, std::int64_t at_us) {
  AuditRow row;
  row.person = person;
  row.action = action;
  row.at_us = at_us;
  return row;
}

std::optional<StorageFault> fault_of(const std::function<void()>& action, std::string* text) {
  try {
    action();
  } catch (const StorageError& error) {
    if (text != nullptr) *text = error.what();
    return error.fault;
  }
  return std::nullopt;
}

bool contains(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

bool eventually(const std::function<bool()>& condition) {
  for (int i = 0; i < 10'000; ++i) {
    if (condition()) return true;
    std::this_thread::sleep_for(std::chrono::milliseconds(1));
  }
  return false;
}

}  // namespace hearthfront::storage::test
