// Documents of logger files: previews and mappings. Pure, any thread; answers are JSON texts.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "server/ingest/csv_guess.h"
#include "server/ingest/csv_preview.h"
#include "storage/store.h"

namespace hearthfront::server {

// A mapping as the furnace knows it: of its plant file, or saved over the API.
struct KnownMapping {
  CsvMapping mapping;
  std::optional<storage::LibraryRow> saved;  // none: of the plant file
  bool replaces_plant_file = false;
  std::string fault;  // a saved one can no longer be used; `mapping` then holds its name alone
};

std::string preview_json(const CsvPreview& preview);
std::string guess_json(const CsvGuess& guess, const CsvPreview& preview);
std::string mapping_json(const KnownMapping& known);
std::string mappings_json(const std::vector<KnownMapping>& known);

}  // namespace hearthfront::server
