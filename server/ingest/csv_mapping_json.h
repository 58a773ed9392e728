// A mapping of a logger file as JSON: the body of the API and what the library stores. The keys are those of
// [[furnace.csv]] in the plant file.
#pragma once

#include <string>
#include <string_view>

#include "server/api/http_server.h"
#include "server/base/plant.h"

namespace hearthfront::server {

// Strict. Throws Problem: 400 broken-json, or 422 invalid-mapping with `field` as `path` and the member, such
// as "mapping.columns[0].unit". `name` is what the address calls the mapping: a "name" in the JSON must equal
// it; empty: the JSON's own, which may be left out.
CsvMapping read_csv_mapping_json(std::string_view json, const Furnace& furnace, const std::string& name,
                                 const std::string& path = "mapping");

// Every key, null where nothing is set; without "name" where the mapping has none.
std::string csv_mapping_json(const CsvMapping& mapping);

}  // namespace hearthfront::server
