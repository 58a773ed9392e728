#include "server/base/time_format.h"

#include "server/base/time_text.h"
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
  PatternReader(std::string_view text, int utc_offset_min, std::string& reason)
      : rest_(text), offset_min_(utc_offset_min), reason_(reason) {}

  std::optional<std::int64_t> read(std::string_view pattern) {
    const std::string words = spelled_out(pattern);
    for (std::size_t i = 0; i < words.size(); ++i) {
      const bool is_word = words[i] == '%';
      if (is_word ? !take_word(words[++i]) : !take_character(words[i])) return {};
    }
    if (!rest_.empty()) return refuse("\"" + clean_text(rest_, 20) + "\" is left over");
    if (half_ == 'p' || half_ == 'a') civil_.hour = civil_.hour % 12 + (half_ == 'p' ? 12 : 0);
    return time_us_from(civil_, offset_min_, reason_);
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

  bool take_zone() {
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
  int offset_min_;
  std::string& reason_;
  CivilTime civil_;
  char half_ = '\0';
};

}  // namespace

std::string time_format_fault(std::string_view pattern) {
  if (pattern == "iso") return {};
  const std::string words = spelled_out(pattern);
  std::string seen;
  for (std::size_t i = 0; i < words.size(); ++i) {
    if (words[i] != '%') continue;
    if (i + 1 == words.size()) return "a single % stands at the end";
    const char word = words[++i];
    if (word == '%') continue;
    if (std::string_view("YymdHIMSfpz").find(word) == std::string_view::npos) {
      return std::string("%") + word +
             " is not known; use %Y %y %m %d %H %I %p %M %S %f %z %F %T, or \"iso\"";
    }
    if (seen.find(word) != std::string::npos) return std::string("%") + word + " stands twice";
    seen += word;
  }
  const auto has = [&](char word) { return seen.find(word) != std::string::npos; };
  if (has('Y') == has('y')) return "needs either %Y or %y for the year";
  if (!has('m') || !has('d')) return "needs %m and %d for month and day";
  if (has('H') == has('I')) return "needs either %H or %I for the hour";
  if (has('I') != has('p')) return "%I (hour 1 to 12) and %p (AM or PM) go together";
  if (!has('M')) return "needs %M for the minute";
  return {};
}

std::optional<std::int64_t> parse_time_as(std::string_view text, std::string_view pattern, int utc_offset_min,
                                          std::string& reason) {
  if (pattern == "iso") return parse_loose_time(text, utc_offset_min, reason);
  return PatternReader(text, utc_offset_min, reason).read(pattern);
}

}  // namespace hearthfront::server
