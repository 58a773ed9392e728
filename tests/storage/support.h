// What the storage tests share: a folder that cleans up after itself, records with sensible fields, and an
// outside view of the file through the plain SQLite library, which knows nothing of the store's own code.
#pragma once

#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "storage/store.h"

namespace hearthfront::storage::test {

class Folder {
 public:
  Folder();
  ~Folder();
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  const std::string& path() const { return path_; }
  std::string database() const { return path_ + "/plant.db"; }

 private:
  std::string path_;
};

// Statements run by an independent connection.
class Outside {
 public:
  explicit Outside(const std::string& path);
  ~Outside();
  Outside(const Outside&) = delete;
  Outside& operator=(const Outside&) = delete;
  std::string text(const std::string& sql);  // first column of the first row, "" without rows
  std::int64_t number(const std::string& sql);
  std::string failure(const std::string& sql);  // SQLite's message, "" where it succeeds
  bool sound() { return text("PRAGMA integrity_check") == "ok"; }

 private:
  void* handle_ = nullptr;
};

StoreOptions at(const std::string& path);
std::vector<Reading> series(std::int64_t channel, std::int64_t from_us, int count, double value = 900);
LoadRow load(const std::string& name, std::int64_t started_us, std::optional<std::int64_t> ended_us = {},
             const std::string& chamber = "main", const std::string& furnace = "pit-2");
AuditRow by(const std::string& person, const std::string& action, std::int64_t at_us = 1'000);

// The fault that `action` fails with; nothing where it succeeds. `text` receives the message.
std::optional<StorageFault> fault_of(const std::function<void()>& action, std::string* text = nullptr);
bool contains(const std::string& text, const std::string& part);

// Waits for what another thread is about to do; false after ten seconds.
bool eventually(const std::function<bool()>& condition);

}  // namespace hearthfront::storage::test
