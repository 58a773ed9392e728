// Small helpers between SQLite columns and plain records. Threads: none of their own.
#pragma once

#include <cstdint>
#include <optional>

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

}  // namespace hearthfront::storage
