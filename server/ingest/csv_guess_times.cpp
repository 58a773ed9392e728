// guess_times (csv_guess_parts.h): which columns hold the time, and how.
#include <algorithm>
#include <cstdlib>

#include "server/base/time_format.h"
#include "server/ingest/csv_guess_parts.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t most_columns = 12;  // a time stands among the first
constexpr std::int64_t day_us = 86'400'000'000;

const std::vector<std::string>& dates() {
  static const std::vector<std::string> list{"%Y-%m-%d", "%d.%m.%Y", "%d.%m.%y", "%d/%m/%Y", "%m/%d/%Y",
                                             "%d/%m/%y", "%m/%d/%y", "%Y/%m/%d", "%d-%m-%Y", "%m-%d-%Y",
                                             "%d-%m-%y", "%m-%d-%y", "%Y.%m.%d", "%Y%m%d",   "%d-%b-%Y",
                                             "%d-%b-%y", "%d %b %Y", "%b %d %Y"};
  return list;
}

const std::vector<std::string>& clocks() {
  static const std::vector<std::string> list{"%H:%M:%S",    "%H:%M",       "%H:%M:%S.%f",
                                             "%H:%M:%S,%f", "%I:%M:%S %p", "%I:%M:%S%p",
                                             "%I:%M %p",    "%H.%M.%S",    "%H%M%S"};
  return list;
}

// What times read by one format come to. Of two formats that both fit, the better one does not lie in the
// future, runs forward, and spans less time.
struct Fit {
  std::string format;
  bool has_zone = true;
  std::size_t future = 0, backward = 0;
  std::int64_t span_us = 0, last_us = 0;
};

std::optional<Fit> fit_of(const std::vector<std::string>& texts, const std::string& format,
                          std::int64_t now_us) {
  Fit fit;
  fit.format = format;
  std::int64_t least = INT64_MAX, most = INT64_MIN, before = INT64_MIN;
  std::size_t misses = 0;
  std::string reason;
  for (const std::string& text : texts) {
    const auto time = parse_written_time(text, format, reason);
    if (!time) {
      if (++misses * 20 > texts.size()) return {};
      continue;
    }
    fit.has_zone = fit.has_zone && time->has_zone;
    if (time->us > now_us + day_us) ++fit.future;
    if (time->us < before) ++fit.backward;
    before = time->us;
    least = std::min(least, before);
    most = std::max(most, before);
  }
  fit.span_us = most - least;
  fit.last_us = most;
  return fit;
}

std::optional<GuessedTimes> best_of(std::vector<Fit> fits, std::int64_t now_us) {
  if (fits.empty()) return {};
  std::stable_sort(fits.begin(), fits.end(), [](const Fit& a, const Fit& b) {
    if ((a.future > 0) != (b.future > 0)) return b.future > 0;
    if (a.backward != b.backward) return a.backward < b.backward;
    return a.span_us < b.span_us;
  });
  Fit* best = &fits.front();
  GuessedTimes times;
  // Only day and month can be mistaken for each other.
  if (fits.size() > 1) {
    Fit& other = fits[1];
    const bool told =
        other.future > 0 || other.backward > best->backward || other.span_us > 4 * best->span_us;
    if (!told) {
      const auto distance = [now_us](const Fit& fit) { return std::abs(now_us - fit.last_us); };
      if (distance(other) < distance(*best)) best = &other;
      times.unsure = "Day and month cannot be told apart in this file: " + fits[0].format + " and " +
                     fits[1].format + " both fit.";
    }
  }
  times.format = best->format;
  times.has_zone = best->has_zone;
  return times;
}

std::vector<std::string> column_of(const std::vector<Cells>& rows, std::size_t index) {
  std::vector<std::string> texts;
  for (const Cells& row : rows) {
    if (index < row.size() && !row[index].empty()) texts.push_back(row[index]);
  }
  if (texts.size() * 2 < rows.size()) texts.clear();
  return texts;
}

std::vector<Fit> fits_of(const std::vector<std::string>& texts, const std::vector<std::string>& formats,
                         std::int64_t now_us) {
  std::vector<Fit> fits;
  if (texts.empty()) return fits;
  for (const std::string& format : formats) {
    if (auto fit = fit_of(texts, format, now_us)) fits.push_back(std::move(*fit));
  }
  return fits;
}

std::string joined(std::string_view first, std::string_view between, std::string_view second) {
  return std::string(first).append(between).append(second);
}

const std::vector<std::string>& full_formats() {
  static const std::vector<std::string> list = [] {
    std::vector<std::string> made;
    for (const std::string& date : dates()) {
      for (const std::string& clock : clocks()) {
        for (const char* between : {" ", "T", ", ", ""}) {
          if (*between == '\0' && (date != "%Y%m%d" || clock != "%H%M%S")) continue;
          made.push_back(joined(date, between, clock));
        }
        made.push_back(joined(date, " ", clock + " %z"));
        made.push_back(joined(clock, " ", date));
      }
    }
    return made;
  }();
  return list;
}

std::optional<GuessedTimes> one_column(const std::vector<Cells>& rows, std::size_t width,
                                       std::int64_t now_us) {
  for (const bool plain : {true, false}) {
    for (std::size_t i = 0; i < width; ++i) {
      const auto texts = column_of(rows, i);
      auto times =
          best_of(fits_of(texts, plain ? std::vector<std::string>{"iso"} : full_formats(), now_us), now_us);
      if (!times) continue;
      times->time_index = i;
      return times;
    }
  }
  return {};
}

std::optional<GuessedTimes> two_columns(const std::vector<Cells>& rows, std::size_t width,
                                        std::int64_t now_us) {
  for (std::size_t d = 0; d < width; ++d) {
    const auto days = column_of(rows, d);
    std::vector<std::string> midnights;
    midnights.reserve(days.size());
    for (const std::string& day : days) midnights.push_back(day + " 00:00");
    std::vector<std::string> day_formats;
    for (const std::string& date : dates()) {
      if (!fits_of(midnights, {date + " %H:%M"}, now_us).empty()) day_formats.push_back(date);
    }
    for (std::size_t t = 0; t < width && !day_formats.empty(); ++t) {
      if (t == d) continue;
      std::vector<std::string> texts;
      for (const Cells& row : rows) {
        if (!row[d].empty() && !row[t].empty()) texts.push_back(row[d] + " " + row[t]);
      }
      std::vector<std::string> formats;
      for (const std::string& date : day_formats) {
        for (const std::string& clock : clocks()) formats.push_back(joined(date, " ", clock));
      }
      auto times = best_of(fits_of(texts, formats, now_us), now_us);
      if (!times) continue;
      times->time_index = t;
      times->date_index = d;
      return times;
    }
  }
  return {};
}

// Seconds, milliseconds or days as plain numbers, of the years 2000 to 2065 and not running backward.
std::optional<GuessedTimes> counted(const std::vector<Cells>& rows, std::size_t width, std::int64_t now_us) {
  constexpr std::int64_t year_2000_us = 946'684'800'000'000, year_2065_us = 2'997'993'600'000'000;
  for (const char* format : {"epoch_s", "epoch_ms", "serial_day"}) {
    for (std::size_t i = 0; i < width; ++i) {
      const auto texts = column_of(rows, i);
      if (texts.empty()) continue;
      const auto fit = fit_of(texts, format, now_us);
      if (!fit || fit->last_us - fit->span_us < year_2000_us || fit->last_us > year_2065_us) continue;
      if (fit->backward * 10 > texts.size() || (texts.size() > 1 && fit->span_us == 0)) continue;
      GuessedTimes times;
      times.time_index = i;
      times.format = format;
      times.has_zone = fit->has_zone;
      times.unsure =
          "The times are plain numbers, read as " + times.format + ": compare the first with the logger.";
      return times;
    }
  }
  return {};
}

}  // namespace

std::optional<GuessedTimes> guess_times(const std::vector<Cells>& rows, std::int64_t now_us) {
  if (rows.empty()) return {};
  const std::size_t width = std::min(rows.front().size(), most_columns);
  if (auto times = one_column(rows, width, now_us)) return times;
  if (auto times = two_columns(rows, width, now_us)) return times;
  return counted(rows, width, now_us);
}

}  // namespace hearthfront::server
