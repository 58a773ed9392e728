// Times of logger files by a pattern of strptime words, read without locale. A pattern is checked when
// the plant file is read, so that a wrong one is found at start and not in the night. Pure, any thread.
//
// Instead of a pattern: "iso" (YYYY-MM-DD HH:MM:SS and what RFC 3339 allows), "epoch_s" and "epoch_ms"
// (seconds and milliseconds since 1970-01-01 UTC, a fraction allowed), "serial_day" (days of a spreadsheet
// since 1899-12-30 by the wall clock, with the time of day as fraction; common practice, no source). Words:
// %Y year, %y year 2000-2099, %m month, %b month as Jan, Feb, ... in English, %d day, %H hour 0-23, %I hour
// 1-12 with %p AM or PM, %M minute, %S second, %f fraction of a second, %z offset or Z, %F = %Y-%m-%d, %T =
// %H:%M:%S, %% percent. A space stands for one or more spaces; any other character for itself.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>

#include "server/base/time_text.h"

namespace hearthfront::server {

// Empty where the pattern is one of the fixed words or fixes day and time of day; otherwise what is wrong
// with it.
std::string time_format_fault(std::string_view pattern);

// `pattern` must be without fault. Empty with `reason` where the text does not fit.
std::optional<WrittenTime> parse_written_time(std::string_view text, std::string_view pattern,
                                              std::string& reason);

// The same as an instant. A time without %z is taken at `utc_offset_min` minutes east of
// Greenwich.
std::optional<std::int64_t> parse_time_as(std::string_view text, std::string_view pattern, int utc_offset_min,
                                          std::string& reason);

}  // namespace hearthfront::server
