// Numbers in cells of logger files. Pure, any thread.
#pragma once

#include <optional>
#include <string>
#include <string_view>

namespace hearthfront::server {

// A cell as a number: optional sign, digits, the decimal sign, optional exponent, nothing else; with a sign
// of `thousands` ('\0': none) the digits before the decimal sign may be in groups of three, a no-break blank
// standing for a blank. Empty with `reason` otherwise.
std::optional<double> parse_decimal(std::string_view cell, char decimal, std::string& reason,
                                    char thousands = '\0');

}  // namespace hearthfront::server
