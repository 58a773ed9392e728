#include "storage/rows.h"

#include <SQLiteCpp/Column.h>
#include <SQLiteCpp/Statement.h>

namespace hearthfront::storage {

void bind_optional(SQLite::Statement& statement, int index, std::optional<std::int64_t> value) {
  if (value) {
    statement.bind(index, *value);
  } else {
    statement.bind(index);
  }
}

std::optional<std::int64_t> optional_column(SQLite::Statement& statement, int index) {
  const auto column = statement.getColumn(index);
  if (column.isNull()) return std::nullopt;
  return column.getInt64();
}

LoadRow load_from(SQLite::Statement& statement) {
  LoadRow row;
  row.id = statement.getColumn(0).getInt64();
  row.name = statement.getColumn(1).getString();
  row.furnace = statement.getColumn(2).getString();
  row.chamber = statement.getColumn(3).getString();
  row.person = statement.getColumn(4).getString();
  row.started_us = statement.getColumn(5).getInt64();
  row.ended_us = optional_column(statement, 6);
  row.created_us = statement.getColumn(7).getInt64();
  row.revision = statement.getColumn(8).getInt64();
  row.definition_json = statement.getColumn(9).getString();
  row.cancelled = statement.getColumn(10).getInt() != 0;
  return row;
}

Stay stay_from(SQLite::Statement& statement) {
  return {.furnace = statement.getColumn(0).getString(),
          .chamber = statement.getColumn(1).getString(),
          .from_us = statement.getColumn(2).getInt64(),
          .to_us = optional_column(statement, 3),
          .places = statement.getColumn(4).getInt64()};
}

std::vector<LoadOn> loads_on_from(SQLite::Statement& statement) {
  std::vector<LoadOn> rows;
  while (statement.executeStep())
    rows.push_back({statement.getColumn(0).getInt64(), statement.getColumn(1).getInt64()});
  return rows;
}

}  // namespace hearthfront::storage
