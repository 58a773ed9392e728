// Small helpers between SQLite columns and plain records. Threads: none of their own.
#pragma once

#include <cstdint>
#include <optional>
#include <vector>

#include "storage/store.h"

namespace SQLite {
class Statement;
}

namespace hearthfront::storage {

void bind_optional(SQLite::Statement& statement, int index, std::optional<std::int64_t> value);
std::optional<std::int64_t> optional_column(SQLite::Statement& statement, int index);

// Columns in the order of this list, from column 0.
#define HF_LOAD_COLUMNS                                                                               \
  "id, name, furnace, chamber, person, started_us, ended_us, created_us, revision, definition_json, " \
  "cancelled"
LoadRow load_from(SQLite::Statement& statement);

#define HF_STAY_COLUMNS "furnace, chamber, from_us, to_us, places"
Stay stay_from(SQLite::Statement& statement);

#define HF_LOADS_ON_FURNACE                                                                          \
  "SELECT id, revision FROM load WHERE ended_us IS NULL AND EXISTS(SELECT 1 FROM load_stay s WHERE " \
  "s.load = load.id AND s.furnace = ? AND s.to_us IS NULL) ORDER BY id"
std::vector<LoadOn> loads_on_from(SQLite::Statement& statement);

}  // namespace hearthfront::storage
