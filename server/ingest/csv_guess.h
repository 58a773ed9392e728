// Proposes how a logger file is to be read, from the file itself and the furnace's channels. A proposal to be
// looked at, never used unseen: where it is not sure it says so. Rules of thumb: common practice, no source.
#pragma once

#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

#include "server/base/plant.h"

namespace hearthfront::server {

struct Unsure {
  std::string field;  // key of the mapping: "decimal", "columns[1].unit"
  std::string text;
};

struct CsvGuess {
  CsvMapping mapping;  // without name; time_column or columns empty where nothing was recognised
  std::vector<Unsure> unsure;
};

// `now_us`: the daemon's clock, since a log does not lie in the future. Throws Problem (422, bad-csv) where
// the bytes are no text or empty.
CsvGuess guess_csv_mapping(std::string_view bytes, const Furnace& furnace, std::int64_t now_us);

}  // namespace hearthfront::server
