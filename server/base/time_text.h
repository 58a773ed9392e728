// Times as text: RFC 3339 date-times to and from integer microseconds since 1970-01-01 UTC. Pure
// functions without locale, safe from any thread. Wrong text is answered with the reason, never guessed.
// Source: RFC 3339 section 5 (syntax, restrictions); proleptic Gregorian calendar, years 0000 to 9999.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>

namespace hearthfront::server {

// Parts of a date and a time of day as written, before any zone is applied.
struct CivilTime {
  int year = 1970, month = 1, day = 1;
  int hour = 0, minute = 0, second = 0;
  int microsecond = 0;
};

// Empty where a part is out of its range (second 60 included: a leap second has no place on this time
// scale); `reason` then says which.
std::optional<std::int64_t> time_us_from(const CivilTime& civil, int utc_offset_min, std::string& reason);

// A time as a file writes it: an instant where it carries its zone, else what a clock on the wall showed.
struct WrittenTime {
  std::int64_t us = 0;  // UTC with a zone; else the wall clock counted as though it were UTC
  bool has_zone = false;
};
// The instant, without zone at `utc_offset_min` minutes east of Greenwich. Empty with `reason` where that
// leaves the years 0000 to 9999.
std::optional<std::int64_t> instant_of(const WrittenTime& written, int utc_offset_min, std::string& reason);

// Full RFC 3339: date, T, time, optional fraction of 1 to 9 digits (cut to microseconds), Z or an offset.
// Empty with `reason` otherwise.
std::optional<std::int64_t> parse_time(std::string_view text, std::string& reason);

// The same, but tolerant as logger files are: a space instead of T, seconds and zone may be missing.
std::optional<WrittenTime> parse_loose_time(std::string_view text, std::string& reason);
// A time without zone is taken at `utc_offset_min` minutes east of Greenwich.
std::optional<std::int64_t> parse_loose_time(std::string_view text, int utc_offset_min, std::string& reason);

// "2026-03-02T06:05:00Z"; a fraction only where it is not zero, without trailing zeros.
// Throws std::out_of_range outside the years 0000 to 9999.
std::string format_time(std::int64_t time_us);

inline constexpr std::int64_t earliest_time_us = -62167219200'000'000;  // 0000-01-01T00:00:00Z
inline constexpr std::int64_t latest_time_us = 253402300799'999'999;    // 9999-12-31T23:59:59.999999Z

}  // namespace hearthfront::server
