// The parts of read_plant (plant.h), one for each kind of table in the two files. Internal to server/base.
// All report into the tables' ConfigErrors and return what could be read.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "server/base/plant.h"
#include "server/base/strict_toml.h"

namespace hearthfront::server {

// A word that may stand in an address and in a file: a-z, 0-9, and - _ . inside, 1 to 40 bytes.
bool read_id(ConfigTable& table, std::string_view key, std::string& into);
// Reports where `id` is already in `taken`; else adds it.
void claim(ConfigTable& table, std::string_view key, const std::string& id, std::vector<std::string>& taken);
std::string list_of(const std::vector<std::string>& words);  // "a", "b" or "c", each in quotes

// `furnace`: its chambers and the channels read so far.
Channel read_channel(ConfigTable& table, const Furnace& furnace);
CsvMapping read_csv_mapping(ConfigTable& table, const Furnace& furnace);
std::vector<SteelEntry> read_steels(const std::string& path, ConfigErrors& errors);

}  // namespace hearthfront::server
