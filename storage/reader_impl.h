// The inside of Reader: a read-only connection, and one short read transaction around each call, so that a
// call sees one state of the file and never holds up a checkpoint for long. Only reader*.cpp include this.
//
// Threads: as Reader, one at a time. Failure: StorageError, from `read`.
#pragma once

#include <cstdint>
#include <map>
#include <optional>
#include <string>
#include <string_view>
#include <type_traits>

#include "storage/connection.h"
#include "storage/files.h"
#include "storage/store.h"

namespace hearthfront::storage {

class Reader::Impl {
 public:
  explicit Impl(const std::string& path);

  // `doing` as for explain(). `body` runs inside one read transaction; what it returns is returned.
  template <typename Body>
  std::invoke_result_t<Body> read(std::string_view doing, Body body) {
    files_.check();
    try {
      connection_.run("BEGIN");
      const Ending ending(connection_);
      return body();
    } catch (...) {
      rethrow(doing);
    }
  }

  SQLite::Statement& statement(const char* sql) { return connection_.statement(sql); }

  std::optional<Reading> newest(std::int64_t channel, std::int64_t at_us);
  std::map<std::int64_t, Choice> choices(std::int64_t channel, std::int64_t from_us, std::int64_t to_us);

 private:
  // Ends the read transaction on every way out.
  class Ending {
   public:
    explicit Ending(Connection& connection) : connection_(connection) {}
    ~Ending();
    Ending(const Ending&) = delete;
    Ending& operator=(const Ending&) = delete;

   private:
    Connection& connection_;
  };

  [[noreturn]] void rethrow(std::string_view doing);

  Connection connection_;
  FileGuard files_;
};

void check_limit(int limit);  // throws misuse below 1

}  // namespace hearthfront::storage
