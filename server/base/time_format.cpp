#include "server/base/time_format.h"

#include <algorithm>
#include <charconv>
#include <cmath>

#include "server/base/utf8.h"

namespace hearthfront::server {
namespace {

// %F and %T are spelled out, so that the rest knows single words only.
std::string spelled_out(std::string_view pattern) {
  std::string text;
  for (std::size_t i = 0; i < pattern.size(); ++i) {
    if (pattern[i] != '%' || i + 1 == pattern.size()) {
      text += pattern[i];
      continue;
    }
    const char word = pattern[++i];
    if (word == 'F') {
      text += "%Y-%m-%d";
    } else if (word == 'T') {
      text += "%H:%M:%S";
    } else {
      text += {'%', word};
    }
  }
  return text;
}

class PatternReader {
 public:
  PatternReader(std::string_view text, std::string& reason) : rest_(text), reason_(reason) {}

  std::optional<WrittenTime> read(std::string_view pattern) {
    const std::string words = spelled_out(pattern);
    for (std::size_t i = 0; i < words.size(); ++i) {
      const bool is_word = words[i] == '%';
      if (is_word ? !take_word(words[++i]) : !take_character(words[i])) return {};
    }
    if (!rest_.empty()) return refuse("\"" + clean_text(rest_, 20) + "\" is left over");
    if (half_ == 'p' || half_ == 'a') civil_.hour = civil_.hour % 12 + (half_ == 'p' ? 12 : 0);
    const std::optional<std::int64_t> us = time_us_from(civil_, offset_min_, reason_);
    if (!us) return {};
    return WrittenTime{*us, has_zone_};
  }

 private:
  std::nullopt_t refuse(std::string words) {
    reason_ = std::move(words);
    return std::nullopt;
  }
  bool next_is_digit() const { return !rest_.empty() && rest_.front() >= '0' && rest_.front() <= '9'; }

  bool take_character(char wanted) {
    if (rest_.empty() || rest_.front() != wanted) {
      // A single byte of a longer character would not be UTF-8.
      const std::string what =
          wanted >= 0 ? std::string("\"") + wanted + "\"" : "the characters of the pattern";
      refuse("expected " + what + (rest_.empty() ? " where the text ends" : ""));
      return false;
    }
    rest_.remove_prefix(1);
    while (wanted == ' ' && !rest_.empty() && rest_.front() == ' ') rest_.remove_prefix(1);
    return true;
  }

  bool take_number(std::string_view what, std::size_t min_digits, std::size_t max_digits, int& into) {
    std::size_t count = 0;
    int value = 0;
    for (; count < max_digits && next_is_digit(); ++count) {
      value = value * 10 + (rest_.front() - '0');
      rest_.remove_prefix(1);
    }
    if (count < min_digits) {
      refuse("expected the " + std::string(what) +
             (min_digits == 4               ? " with 4 digits"
              : rest_.empty() && count == 0 ? " where the text ends"
                                            : ""));
      return false;
    }
    into = value;
    return true;
  }

  bool take_fraction() {
    std::size_t count = 0;
    for (; count < 9 && next_is_digit(); ++count) {
      if (count < 6) civil_.microsecond = civil_.microsecond * 10 + (rest_.front() - '0');
      rest_.remove_prefix(1);
    }
    if (count == 0) {
      refuse("expected a fraction of the second");
      return false;
    }
    for (; count < 6; ++count) civil_.microsecond *= 10;
    return true;
  }

  bool take_half() {
    const char first = rest_.size() >= 2 ? static_cast<char>(rest_[0] | 0x20) : '\0';
    if ((first != 'a' && first != 'p') || (rest_[1] | 0x20) != 'm') {
      refuse("expected AM or PM");
      return false;
    }
    half_ = first;
    rest_.remove_prefix(2);
    return true;
  }

  bool take_month_name() {
    static constexpr std::string_view names = "janfebmaraprmayjunjulaugsepoctnovdec";
    std::string start;
    for (const char c : rest_.substr(0, 3)) start += static_cast<char>(c | 0x20);
    const std::size_t at = start.size() == 3 ? names.find(start) : std::string_view::npos;
    if (at == std::string_view::npos || at % 3 != 0) {
      refuse("expected a month such as Jan or Feb");
      return false;
    }
    civil_.month = static_cast<int>(at / 3) + 1;
    rest_.remove_prefix(3);
    return true;
  }

  bool take_zone() {
    has_zone_ = true;
    if (!rest_.empty() && (rest_.front() == 'Z' || rest_.front() == 'z')) {
      rest_.remove_prefix(1);
      offset_min_ = 0;
      return true;
    }
    const bool east = !rest_.empty() && rest_.front() == '+', west = !rest_.empty() && rest_.front() == '-';
    int hour = 0, minute = 0;
    if (east || west) rest_.remove_prefix(1);
    if (!(east || west) || !take_number("offset", 2, 2, hour)) {
      refuse("expected Z or an offset such as +01:00");
      return false;
    }
    if (!rest_.empty() && rest_.front() == ':') rest_.remove_prefix(1);
    if (!take_number("minutes of the offset", 2, 2, minute)) return false;
    if (hour > 23 || minute > 59) {
      refuse("the offset is beyond 23:59");
      return false;
    }
    offset_min_ = (east ? 1 : -1) * (hour * 60 + minute);
    return true;
  }

  bool take_word(char word) {
    switch (word) {
      case 'Y':
        return take_number("year", 4, 4, civil_.year);
      case 'y':
        if (!take_number("year", 2, 2, civil_.year)) return false;
        civil_.year += 2000;
        return true;
      case 'm':
        return take_number("month", 1, 2, civil_.month);
      case 'b':
        return take_month_name();
      case 'd':
        return take_number("day", 1, 2, civil_.day);
      case 'H':
        return take_number("hour", 1, 2, civil_.hour);
      case 'I':
        if (!take_number("hour", 1, 2, civil_.hour)) return false;
        if (civil_.hour >= 1 && civil_.hour <= 12) return true;
        refuse("the hour is not within 1 to 12");
        return false;
      case 'M':
        return take_number("minute", 1, 2, civil_.minute);
      case 'S':
        return take_number("second", 1, 2, civil_.second);
      case 'f':
        return take_fraction();
      case 'p':
        return take_half();
      case 'z':
        return take_zone();
      default:
        return take_character('%');
    }
  }

  std::string_view rest_;
  int offset_min_ = 0;
  bool has_zone_ = false;
  std::string& reason_;
  CivilTime civil_;
  char half_ = '\0';
};

// Digits and, after a point or comma, a fraction: as a whole number of units of 10^-`decimals`, further
// digits cut. Empty where it is none, or more than 64 bits hold.
std::optional<std::int64_t> scaled_number(std::string_view text, int decimals) {
  const std::size_t sign = std::min(text.find_first_of(".,"), text.size());
  std::string digits(text.substr(0, sign));
  std::string fraction(sign < text.size() ? text.substr(sign + 1) : std::string_view{});
  if (digits.empty() || (sign < text.size() && fraction.empty())) return {};
  if ((digits + fraction).find_first_not_of("0123456789") != std::string::npos) return {};
  fraction.resize(static_cast<std::size_t>(decimals), '0');
  digits += fraction;
  std::int64_t value = 0;
  const char* last = digits.data() + digits.size();
  const auto [end, fault] = std::from_chars(digits.data(), last, value);
  if (fault != std::errc{} || end != last) return {};
  return value;
}

std::optional<WrittenTime> read_epoch(std::string_view text, int decimals, std::string& reason) {
  const std::optional<std::int64_t> us = scaled_number(text, decimals);
  if (us && *us <= latest_time_us) return WrittenTime{*us, true};
  reason = std::string("expected ") + (decimals == 6 ? "seconds" : "milliseconds") +
           " since 1970-01-01 UTC as a plain number" +
           (us ? "; this one is beyond the year 9999: milliseconds instead of seconds?" : "");
  return {};
}

std::optional<WrittenTime> read_serial_day(std::string_view text, std::string& reason) {
  constexpr std::int64_t day_1970 = 25'569;  // 1970-01-01, counted from 1899-12-30
  constexpr std::int64_t tick = 1'000'000'000;
  const std::optional<std::int64_t> serial = scaled_number(text, 9);
  // Below 61 spreadsheets disagree about 29 February 1900.
  if (!serial || *serial < 61 * tick || *serial >= 2'958'466 * tick) {
    reason = "expected a day number of a spreadsheet such as 46083.25 (2026-03-02 06:00)";
    return {};
  }
  const std::int64_t days = *serial / tick - day_1970;
  const double day_share = static_cast<double>(*serial % tick) / static_cast<double>(tick);
  // Nine decimals of a day are 0.1 ms; spreadsheets show milliseconds.
  const auto ms = static_cast<std::int64_t>(std::llround(day_share * 86'400'000));
  return WrittenTime{(days * 86'400'000 + ms) * 1000, false};
}

}  // namespace

std::string time_format_fault(std::string_view pattern) {
  if (pattern == "iso" || pattern == "epoch_s" || pattern == "epoch_ms" || pattern == "serial_day") return {};
  const std::string words = spelled_out(pattern);
  std::string seen;
  for (std::size_t i = 0; i < words.size(); ++i) {
    if (words[i] != '%') continue;
    if (i + 1 == words.size()) return "a single % stands at the end";
    const char word = words[++i];
    if (word == '%') continue;
    if (std::string_view("YymbdHIMSfpz").find(word) == std::string_view::npos) {
      return std::string("%") + word +
             " is not known; use %Y %y %m %b %d %H %I %p %M %S %f %z %F %T, or \"iso\", \"epoch_s\", "
             "\"epoch_ms\", \"serial_day\"";
    }
    if (seen.find(word) != std::string::npos) return std::string("%") + word + " stands twice";
    seen += word;
  }
  const auto has = [&](char word) { return seen.find(word) != std::string::npos; };
  if (has('Y') == has('y')) return "needs either %Y or %y for the year";
  if (has('m') && has('b')) return "needs either %m or %b for the month";
  if (!(has('m') || has('b')) || !has('d')) return "needs %m and %d for month and day";
  if (has('H') == has('I')) return "needs either %H or %I for the hour";
  if (has('I') != has('p')) return "%I (hour 1 to 12) and %p (AM or PM) go together";
  if (!has('M')) return "needs %M for the minute";
  return {};
}

std::optional<WrittenTime> parse_written_time(std::string_view text, std::string_view pattern,
                                              std::string& reason) {
  if (pattern == "iso") return parse_loose_time(text, reason);
  if (pattern == "epoch_s") return read_epoch(text, 6, reason);
  if (pattern == "epoch_ms") return read_epoch(text, 3, reason);
  if (pattern == "serial_day") return read_serial_day(text, reason);
  return PatternReader(text, reason).read(pattern);
}

std::optional<std::int64_t> parse_time_as(std::string_view text, std::string_view pattern, int utc_offset_min,
                                          std::string& reason) {
  const std::optional<WrittenTime> written = parse_written_time(text, pattern, reason);
  if (!written) return {};
  return instant_of(*written, utc_offset_min, reason);
}

}  // namespace hearthfront::server
