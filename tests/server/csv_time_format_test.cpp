// Times of logger files by pattern. Meaning of the words: POSIX strptime; %f and %z as in ISO C strftime's
// usual extensions (common practice, no source). Expected moments were counted by hand.
#include "server/base/time_format.h"

#include <doctest/doctest.h>

#include <string>

#include "server/base/time_text.h"

using namespace hearthfront::server;

namespace {

// The moment in RFC 3339, or the reason.
std::string read_as(std::string_view text, std::string_view pattern, int utc_offset_min = 0) {
  REQUIRE(time_format_fault(pattern) == "");
  std::string reason;
  const auto time_us = parse_time_as(text, pattern, utc_offset_min, reason);
  return time_us ? format_time(*time_us) : reason;
}

}  // namespace

TEST_CASE("patterns that loggers use") {
  CHECK(read_as("2026-03-02 07:05", "iso", 60) == "2026-03-02T06:05:00Z");
  CHECK(read_as("02.03.2026 07:05:00", "%d.%m.%Y %H:%M:%S", 60) == "2026-03-02T06:05:00Z");
  CHECK(read_as("2.3.2026 7:05", "%d.%m.%Y %H:%M") == "2026-03-02T07:05:00Z");
  CHECK(read_as("02/03/26   07:05:00", "%d/%m/%y %H:%M:%S") == "2026-03-02T07:05:00Z");
  CHECK(read_as("03/02/2026 12:05:00 AM", "%m/%d/%Y %I:%M:%S %p") == "2026-03-02T00:05:00Z");
  CHECK(read_as("03/02/2026 12:05:00 pm", "%m/%d/%Y %I:%M:%S %p") == "2026-03-02T12:05:00Z");
  CHECK(read_as("03/02/2026 1:05:00 PM", "%m/%d/%Y %I:%M:%S %p") == "2026-03-02T13:05:00Z");
  CHECK(read_as("20260302070500", "%Y%m%d%H%M%S") == "2026-03-02T07:05:00Z");
  CHECK(read_as("2026-03-02 07:05:00,250", "%F %T,%f") == "2026-03-02T07:05:00.25Z");
  CHECK(read_as("2026-03-02T07:05:00+0100", "%FT%T%z", 300) == "2026-03-02T06:05:00Z");  // its own zone wins
  CHECK(read_as("2026-03-02T07:05:00-05:30", "%FT%T%z") == "2026-03-02T12:35:00Z");
  CHECK(read_as("2026-03-02T07:05:00Z", "%FT%T%z", 300) == "2026-03-02T07:05:00Z");
  CHECK(read_as("100% 2026-03-02 07:05:00", "100%% %F %T") == "2026-03-02T07:05:00Z");
  CHECK(read_as("01.01.2026 00:30:00", "%d.%m.%Y %T", 60) == "2025-12-31T23:30:00Z");
}

TEST_CASE("a text that does not fit says where") {
  const std::string_view pattern = "%d.%m.%Y %H:%M:%S";
  CHECK(read_as("", pattern) == "expected the day where the text ends");
  CHECK(read_as("2026-03-02 07:05:00", pattern) == "expected \".\"");
  CHECK(read_as("02.03.26 07:05:00", pattern) == "expected the year with 4 digits");
  CHECK(read_as("02.03.2026", pattern) == "expected \" \" where the text ends");
  CHECK(read_as("02.03.2026 07:05", pattern) == "expected \":\" where the text ends");
  CHECK(read_as("02.03.2026 07:05:00 Uhr", pattern) == "\" Uhr\" is left over");
  CHECK(read_as("02.03.2026 07:05:00 \xb0", pattern) == "\" °\" is left over");  // UTF-8 whatever came
  CHECK(read_as("2026-03-02 at 07:05", "%F à %H:%M") == "expected the characters of the pattern");
  CHECK(read_as("31.02.2026 07:05:00", pattern) == "month 2 of 2026 has no day 31");
  CHECK(read_as("03.31.2026 07:05:00", pattern) == "there is no month 31");
  CHECK(read_as("02.03.2026 25:05:00", pattern) == "the hour is not within 00 to 23");
  CHECK(read_as("02.03.2026 07:05:60", pattern) ==
        "second 60 (a leap second) is not taken; send 59 or the next second");
  CHECK(read_as("3/2/2026 13:05 PM", "%m/%d/%Y %I:%M %p") == "the hour is not within 1 to 12");
  CHECK(read_as("3/2/2026 1:05", "%m/%d/%Y %I:%M %p") == "expected \" \" where the text ends");
  CHECK(read_as("3/2/2026 1:05 xx", "%m/%d/%Y %I:%M %p") == "expected AM or PM");
  CHECK(read_as("2026-03-02T07:05:00", "%FT%T%z") == "expected Z or an offset such as +01:00");
  CHECK(read_as("2026-03-02T07:05:00.", "%FT%T.%f") == "expected a fraction of the second");
}

TEST_CASE("a pattern must fix day and time of day, once each") {
  CHECK(time_format_fault("iso") == "");
  CHECK(time_format_fault("%F %T") == "");
  CHECK(time_format_fault("%F %H:%M") == "");
  CHECK(time_format_fault("") == "needs either %Y or %y for the year");
  CHECK(time_format_fault("%Y %y %m %d %H:%M") == "needs either %Y or %y for the year");
  CHECK(time_format_fault("%d.%Y %H:%M") == "needs %m and %d for month and day");
  CHECK(time_format_fault("%F") == "needs either %H or %I for the hour");
  CHECK(time_format_fault("%F %I:%M") == "%I (hour 1 to 12) and %p (AM or PM) go together");
  CHECK(time_format_fault("%F %H") == "needs %M for the minute");
  CHECK(time_format_fault("%F %T %d") == "%d stands twice");
  CHECK(time_format_fault("%F %T %") == "a single % stands at the end");
  CHECK(time_format_fault("%F %T %Q") ==
        "%Q is not known; use %Y %y %m %b %d %H %I %p %M %S %f %z %F %T, or \"iso\", \"epoch_s\", "
        "\"epoch_ms\", \"serial_day\"");
}
