#include "server/base/time_text.h"

#include <chrono>
#include <cstdio>
#include <stdexcept>

namespace hearthfront::server {
namespace {

// Reads parts of a text from left to right; the first fault sticks and says what was expected.
class Scanner {
 public:
  explicit Scanner(std::string_view text) : rest_(text) {}

  bool at_end() const { return rest_.empty(); }
  bool next_is(char wanted) const { return !rest_.empty() && rest_.front() == wanted; }
  bool next_is_digit() const { return !rest_.empty() && rest_.front() >= '0' && rest_.front() <= '9'; }

  bool take(char wanted) {
    if (!next_is(wanted)) return false;
    rest_.remove_prefix(1);
    return true;
  }
  bool digits(std::size_t count, int& into) {
    int value = 0;
    for (std::size_t i = 0; i < count; ++i) {
      if (!next_is_digit()) return false;
      value = value * 10 + (rest_.front() - '0');
      rest_.remove_prefix(1);
    }
    into = value;
    return true;
  }

 private:
  std::string_view rest_;
};

bool fail(std::string& reason, std::string_view words) {
  reason = words;
  return false;
}

bool scan_date(Scanner& scan, CivilTime& civil, std::string& reason) {
  if (!scan.digits(4, civil.year) || !scan.take('-') || !scan.digits(2, civil.month) || !scan.take('-') ||
      !scan.digits(2, civil.day)) {
    return fail(reason, "the date is not written YYYY-MM-DD");
  }
  return true;
}

// Digits after the sixth are below what we keep.
bool scan_fraction(Scanner& scan, CivilTime& civil, std::string& reason) {
  int count = 0;
  for (; scan.next_is_digit(); ++count) {
    int digit = 0;
    scan.digits(1, digit);
    if (count < 6) civil.microsecond = civil.microsecond * 10 + digit;
  }
  if (count == 0) return fail(reason, "a point needs digits of the second after it");
  if (count > 9) return fail(reason, "the fraction of the second has more than 9 digits");
  for (; count < 6; ++count) civil.microsecond *= 10;
  return true;
}

bool scan_zone(Scanner& scan, int& offset_min, std::string& reason) {
  if (scan.take('Z') || scan.take('z')) {
    offset_min = 0;
    return true;
  }
  const bool east = scan.take('+');
  if (!east && !scan.take('-')) return fail(reason, "Z or an offset such as +01:00 must follow the time");
  int hour = 0, minute = 0;
  if (!scan.digits(2, hour) || !scan.take(':') || !scan.digits(2, minute)) {
    return fail(reason, "the offset is not written +HH:MM or -HH:MM");
  }
  if (hour > 23 || minute > 59) return fail(reason, "the offset is beyond 23:59");
  offset_min = (east ? 1 : -1) * (hour * 60 + minute);
  return true;
}

bool is_leap(int year) {
  return (year % 4 == 0 && year % 100 != 0) || year % 400 == 0;
}

int days_in(int year, int month) {
  constexpr int days[] = {31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
  return month == 2 && is_leap(year) ? 29 : days[month - 1];
}

}  // namespace

std::optional<std::int64_t> time_us_from(const CivilTime& civil, int utc_offset_min, std::string& reason) {
  const auto refuse = [&reason](std::string words) {
    reason = std::move(words);
    return std::optional<std::int64_t>{};
  };
  if (civil.year < 0 || civil.year > 9999) return refuse("the year is not within 0000 to 9999");
  if (civil.month < 1 || civil.month > 12) return refuse("there is no month " + std::to_string(civil.month));
  if (civil.day < 1 || civil.day > days_in(civil.year, civil.month)) {
    return refuse("month " + std::to_string(civil.month) + " of " + std::to_string(civil.year) +
                  " has no day " + std::to_string(civil.day));
  }
  if (civil.hour < 0 || civil.hour > 23) return refuse("the hour is not within 00 to 23");
  if (civil.minute < 0 || civil.minute > 59) return refuse("the minute is not within 00 to 59");
  if (civil.second == 60) return refuse("second 60 (a leap second) is not taken; send 59 or the next second");
  if (civil.second < 0 || civil.second > 59) return refuse("the second is not within 00 to 59");

  const auto date = std::chrono::year(civil.year) / std::chrono::month(static_cast<unsigned>(civil.month)) /
                    std::chrono::day(static_cast<unsigned>(civil.day));
  const std::int64_t days = std::chrono::sys_days(date).time_since_epoch().count();
  const std::int64_t second_of_day = civil.hour * 3600 + civil.minute * 60 + civil.second;
  const std::int64_t time_us =
      (days * 86'400 + second_of_day - std::int64_t{utc_offset_min} * 60) * 1'000'000 + civil.microsecond;
  if (time_us < earliest_time_us || time_us > latest_time_us) {
    return refuse("the offset carries the time beyond the years 0000 to 9999");
  }
  return time_us;
}

std::optional<std::int64_t> instant_of(const WrittenTime& written, int utc_offset_min, std::string& reason) {
  if (written.has_zone) return written.us;
  const std::int64_t us = written.us - std::int64_t{utc_offset_min} * 60'000'000;
  if (us >= earliest_time_us && us <= latest_time_us) return us;
  reason = "the offset carries the time beyond the years 0000 to 9999";
  return {};
}

std::optional<std::int64_t> parse_time(std::string_view text, std::string& reason) {
  Scanner scan(text);
  CivilTime civil;
  int offset_min = 0;
  if (text.empty()) {
    reason = "the time is empty";
    return {};
  }
  if (!scan_date(scan, civil, reason)) return {};
  if (!scan.take('T') && !scan.take('t')) {
    reason = "T must stand between date and time";
    return {};
  }
  if (!scan.digits(2, civil.hour) || !scan.take(':') || !scan.digits(2, civil.minute) || !scan.take(':') ||
      !scan.digits(2, civil.second)) {
    reason = "the time of day is not written HH:MM:SS";
    return {};
  }
  if (scan.take('.') && !scan_fraction(scan, civil, reason)) return {};
  if (!scan_zone(scan, offset_min, reason)) return {};
  if (!scan.at_end()) {
    reason = "something follows the zone";
    return {};
  }
  return time_us_from(civil, offset_min, reason);
}

std::optional<WrittenTime> parse_loose_time(std::string_view text, std::string& reason) {
  Scanner scan(text);
  CivilTime civil;
  if (text.empty()) {
    reason = "the time is empty";
    return {};
  }
  if (!scan_date(scan, civil, reason)) return {};
  if (!scan.take('T') && !scan.take('t') && !scan.take(' ')) {
    reason = "T or a space must stand between date and time";
    return {};
  }
  if (!scan.digits(2, civil.hour) || !scan.take(':') || !scan.digits(2, civil.minute)) {
    reason = "the time of day is not written HH:MM:SS or HH:MM";
    return {};
  }
  if (scan.take(':')) {
    if (!scan.digits(2, civil.second)) {
      reason = "the time of day is not written HH:MM:SS or HH:MM";
      return {};
    }
    // Loggers that write a decimal comma use it here as well (ISO 8601 allows both signs).
    if ((scan.take('.') || scan.take(',')) && !scan_fraction(scan, civil, reason)) return {};
  }
  const bool has_zone = !scan.at_end();
  int offset_min = 0;
  if (has_zone && !scan_zone(scan, offset_min, reason)) return {};
  if (!scan.at_end()) {
    reason = "something follows the zone";
    return {};
  }
  const std::optional<std::int64_t> us = time_us_from(civil, offset_min, reason);
  if (!us) return {};
  return WrittenTime{*us, has_zone};
}

std::optional<std::int64_t> parse_loose_time(std::string_view text, int utc_offset_min, std::string& reason) {
  const std::optional<WrittenTime> written = parse_loose_time(text, reason);
  if (!written) return {};
  return instant_of(*written, utc_offset_min, reason);
}

std::string format_time(std::int64_t time_us) {
  if (time_us < earliest_time_us || time_us > latest_time_us) {
    throw std::out_of_range("format_time: outside the years 0000 to 9999");
  }
  using namespace std::chrono;
  const sys_time<microseconds> time{microseconds(time_us)};
  const sys_days day = floor<days>(time);
  const year_month_day date(day);
  const std::int64_t us_of_day = (time - day).count();
  const std::int64_t second = us_of_day / 1'000'000;
  char buffer[40];
  std::snprintf(buffer, sizeof buffer, "%04d-%02u-%02uT%02d:%02d:%02d", static_cast<int>(date.year()),
                static_cast<unsigned>(date.month()), static_cast<unsigned>(date.day()),
                static_cast<int>(second / 3600), static_cast<int>(second / 60 % 60),
                static_cast<int>(second % 60));
  std::string text = buffer;
  if (const std::int64_t fraction = us_of_day % 1'000'000; fraction != 0) {
    std::snprintf(buffer, sizeof buffer, ".%06d", static_cast<int>(fraction));
    text += buffer;
    text.erase(text.find_last_not_of('0') + 1);
  }
  return text += 'Z';
}

}  // namespace hearthfront::server
