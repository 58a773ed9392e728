// Units of logger files: their words, where they fit, conversion into the units of channels. Pure, any
// thread. Scales by definition: degC = K - 273.15, degF = 1.8 degC + 32 (BIPM, SI Brochure, 9th
// edition, 2.3.1 for the first); 1 vol% = 10 000 ppm by volume; 1 hPa = 1 mbar = 100 Pa.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "server/base/plant.h"

namespace hearthfront::server {

std::string_view text(FileUnit unit);  // "degC", "degF", "K", "mV", "V", "uV", "wt_pct", "vol_pct", "ppm"
std::string all_file_units();          // their words, for messages: "degC, degF, ... or count"
std::optional<FileUnit> file_unit_from(std::string_view word);
FileUnit file_unit_of(Unit unit);
bool unit_fits(Role role, FileUnit unit);
std::vector<std::string> file_units_of(Role role);  // the words of all units that fit
// Throws std::logic_error where no way leads from one to the other.
double convert(double value, FileUnit from, Unit to);

// The unit that a header text or a cell of a units line names ("TC1 [°F]", "CO in ppm", "C-Pot %") and that
// fits the role. Empty where there is none. UTF-8.
std::optional<FileUnit> unit_in_words(std::string_view words, Role role);
// A unit that words name, whatever it belongs to: "°C", "mV", "%", also "s" or "bar". For telling a units
// line.
bool is_unit_word(std::string_view words);

}  // namespace hearthfront::server
