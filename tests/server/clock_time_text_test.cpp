// RFC 3339 times to and from microseconds. Source of the rules: RFC 3339 section 5 (5.6 grammar, 5.7
// restrictions, 5.8 examples); epoch seconds checked by hand from day counts and by other implementations.
#include "server/base/time_text.h"

#include <doctest/doctest.h>

#include <random>
#include <stdexcept>

using namespace hearthfront::server;

namespace {

constexpr std::int64_t second = 1'000'000;

std::string reason_for(std::string_view text) {
  std::string reason;
  return parse_time(text, reason) ? "taken" : reason;
}

}  // namespace

TEST_CASE("RFC 3339 times are read to the microsecond") {
  struct Row {
    const char* text;
    std::int64_t time_us;
  };
  const Row rows[] = {
      {"1970-01-01T00:00:00Z", 0},
      {"1985-04-12T23:20:50.52Z", 482196050 * second + 520'000},         // RFC 3339 section 5.8
      {"1996-12-19T16:39:57-08:00", 851042397 * second},                 // RFC 3339 section 5.8
      {"1937-01-01T12:00:27.87+00:20", -1041337173 * second + 870'000},  // RFC 3339 section 5.8
      {"2026-03-02T06:05:00Z", 1772431500 * second},
      {"2026-03-02t06:05:00z", 1772431500 * second},  // RFC 3339 section 5.6: lower case is allowed
      {"2026-03-02T07:05:00+01:00", 1772431500 * second},
      {"2026-03-02T06:05:00-00:00", 1772431500 * second},  // RFC 3339 section 4.3: UTC, local offset unknown
      {"2024-02-29T00:00:00Z", 1709164800 * second},       // leap year
      {"2000-02-29T00:00:00Z", 951782400 * second},        // a century that is one
      {"1969-12-31T23:59:59.999999Z", -1},
      {"2026-03-02T06:05:00.123456789Z", 1772431500 * second + 123'456},  // cut, not rounded
      {"2026-03-02T06:05:00.000000999Z", 1772431500 * second},
      {"0000-01-01T00:00:00Z", earliest_time_us},
      {"9999-12-31T23:59:59.999999Z", latest_time_us},
      {"2026-01-01T00:30:00+23:59", 1767141060 * second},
  };
  for (const Row& row : rows) {
    CAPTURE(row.text);
    std::string reason;
    const auto time_us = parse_time(row.text, reason);
    CHECK(reason == "");
    CHECK(time_us == row.time_us);
  }
}

TEST_CASE("a wrong time is refused with the reason") {
  CHECK(reason_for("") == "the time is empty");
  CHECK(reason_for("02.03.2026 06:05") == "the date is not written YYYY-MM-DD");
  CHECK(reason_for("2026-3-2T06:05:00Z") == "the date is not written YYYY-MM-DD");
  CHECK(reason_for("2026-03-02") == "T must stand between date and time");
  CHECK(reason_for("2026-03-02 06:05:00Z") == "T must stand between date and time");
  CHECK(reason_for("2026-03-02T06:05Z") == "the time of day is not written HH:MM:SS");
  CHECK(reason_for("2026-03-02T6:05:00Z") == "the time of day is not written HH:MM:SS");
  CHECK(reason_for("2026-03-02T06:05:00") == "Z or an offset such as +01:00 must follow the time");
  CHECK(reason_for("2026-03-02T06:05:00,5Z") == "Z or an offset such as +01:00 must follow the time");
  CHECK(reason_for("2026-03-02T06:05:00.Z") == "a point needs digits of the second after it");
  CHECK(reason_for("2026-03-02T06:05:00.1234567890Z") == "the fraction of the second has more than 9 digits");
  CHECK(reason_for("2026-03-02T06:05:00+0100") == "the offset is not written +HH:MM or -HH:MM");
  CHECK(reason_for("2026-03-02T06:05:00+24:00") == "the offset is beyond 23:59");
  CHECK(reason_for("2026-03-02T06:05:00+01:60") == "the offset is beyond 23:59");
  CHECK(reason_for("2026-03-02T06:05:00Z ") == "something follows the zone");
  CHECK(reason_for("2026-13-02T06:05:00Z") == "there is no month 13");
  CHECK(reason_for("2026-02-29T06:05:00Z") == "month 2 of 2026 has no day 29");
  CHECK(reason_for("1900-02-29T06:05:00Z") == "month 2 of 1900 has no day 29");
  CHECK(reason_for("2026-04-31T06:05:00Z") == "month 4 of 2026 has no day 31");
  CHECK(reason_for("2026-03-00T06:05:00Z") == "month 3 of 2026 has no day 0");
  CHECK(reason_for("2026-03-02T24:00:00Z") ==
        "the hour is not within 00 to 23");  // RFC 3339 section 5.6, not ISO 8601
  CHECK(reason_for("2026-03-02T06:60:00Z") == "the minute is not within 00 to 59");
  // RFC 3339 section 5.7 allows second 60 in leap seconds; this time scale has no place for it.
  CHECK(reason_for("1990-12-31T23:59:60Z") ==
        "second 60 (a leap second) is not taken; send 59 or the next second");
  CHECK(reason_for("2026-03-02T06:05:61Z") == "the second is not within 00 to 59");
  CHECK(reason_for("0000-01-01T00:00:00+01:00") ==
        "the offset carries the time beyond the years 0000 to 9999");
  CHECK(reason_for(std::string("2026-03-02T06:05:00Z\0", 21)) == "something follows the zone");
}

TEST_CASE("times are written with a fraction only where there is one") {
  CHECK(format_time(0) == "1970-01-01T00:00:00Z");
  CHECK(format_time(1772431500 * second) == "2026-03-02T06:05:00Z");
  CHECK(format_time(1772431500 * second + 500'000) == "2026-03-02T06:05:00.5Z");
  CHECK(format_time(1772431500 * second + 1) == "2026-03-02T06:05:00.000001Z");
  CHECK(format_time(-1) == "1969-12-31T23:59:59.999999Z");
  CHECK(format_time(earliest_time_us) == "0000-01-01T00:00:00Z");
  CHECK(format_time(latest_time_us) == "9999-12-31T23:59:59.999999Z");
  CHECK_THROWS_AS(format_time(latest_time_us + 1), std::out_of_range);
  CHECK_THROWS_AS(format_time(earliest_time_us - 1), std::out_of_range);
}

TEST_CASE("what is written reads back as the same microsecond") {
  std::mt19937_64 random(20260302);
  std::uniform_int_distribution<std::int64_t> any(earliest_time_us, latest_time_us);
  for (int i = 0; i < 20'000; ++i) {
    const std::int64_t time_us = any(random);
    std::string reason;
    REQUIRE(parse_time(format_time(time_us), reason) == time_us);
  }
}

TEST_CASE("logger files may use a space, leave out seconds and zone, and write a decimal comma") {
  std::string reason;
  CHECK(parse_loose_time("2026-03-02 07:05:00", 60, reason) == 1772431500 * second);
  CHECK(parse_loose_time("2026-03-02 07:05", 60, reason) == 1772431500 * second);
  CHECK(parse_loose_time("2026-03-02T06:05:00Z", 60, reason) == 1772431500 * second);  // its own zone wins
  CHECK(parse_loose_time("2026-03-02T06:05:00,25Z", 0, reason) == 1772431500 * second + 250'000);
  CHECK(!parse_loose_time("2026-03-02/06:05", 0, reason));
  CHECK(reason == "T or a space must stand between date and time");
  CHECK(!parse_loose_time("2026-03-02 06:5", 0, reason));
  CHECK(reason == "the time of day is not written HH:MM:SS or HH:MM");
}
