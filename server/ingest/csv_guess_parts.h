// The parts of guess_csv_mapping. Internal to server/ingest.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "server/ingest/csv_guess.h"

namespace hearthfront::server {

using Cells = std::vector<std::string>;

struct GuessedTimes {
  std::size_t time_index = 0;
  std::optional<std::size_t> date_index;
  std::string format;
  std::string unsure;     // why the format may be another one; else empty
  bool has_zone = false;  // the times carry their zone
};
// `rows`: of the middle and end of the file, so that no header is among them.
std::optional<GuessedTimes> guess_times(const std::vector<Cells>& rows, std::int64_t now_us);

// Sets decimal and thousands from the cells that are no times.
void guess_signs(const std::vector<Cells>& rows, const std::vector<std::size_t>& time_columns,
                 CsvGuess& guess);

// Fills guess.mapping.columns. `names` and `units` as in the file, `units` may be empty.
void guess_columns(const std::vector<Cells>& rows, const Cells& names, const Cells& units,
                   const std::vector<std::size_t>& time_columns, const Furnace& furnace, CsvGuess& guess);

// How a mapping names the column: its header text where that is unique, else "#n".
std::string column_word(const Cells& names, std::size_t index);

}  // namespace hearthfront::server
