#include "server/base/time_zone.h"

#include <date/tz.h>

#include <stdexcept>

#include "server/base/time_text.h"

namespace hearthfront::server {
namespace {

using Microseconds = std::chrono::microseconds;

constexpr std::int64_t second_us = 1'000'000;
constexpr std::int64_t day_us = 86'400 * second_us;

const date::time_zone* find(const std::string& name) {
  try {
    return date::locate_zone(name);
  } catch (const std::exception&) {
    return nullptr;
  }
}

std::int64_t us_of(std::chrono::seconds seconds) {
  return seconds.count() * second_us;
}

date::sys_info info_at(const date::time_zone* zone, std::int64_t time_us) {
  return zone->get_info(date::sys_seconds(date::floor<std::chrono::seconds>(Microseconds(time_us))));
}

// The database's ends of time are far beyond what microseconds can hold.
std::int64_t bounded_us(date::sys_seconds time) {
  const std::int64_t s = time.time_since_epoch().count();
  if (s < earliest_time_us / second_us) return earliest_time_us;
  if (s > latest_time_us / second_us) return latest_time_us;
  return s * second_us;
}

}  // namespace

TimeZone::TimeZone(const std::string& name) : name_(name), zone_(find(name)) {
  if (zone_ == nullptr) throw std::invalid_argument("there is no time zone \"" + name + "\"");
}

bool TimeZone::is_known(const std::string& name) {
  return find(name) != nullptr;
}

std::vector<std::string> TimeZone::names() {
  std::vector<std::string> names;
  for (const date::time_zone& zone : date::get_tzdb().zones) names.push_back(zone.name());
  return names;
}

WallTime TimeZone::at(std::int64_t local_us) {
  if (local_us >= sure_from_us_ && local_us < sure_to_us_)
    return {WallTime::Kind::once, local_us - sure_offset_us_, 0};
  const date::local_seconds local(date::floor<std::chrono::seconds>(Microseconds(local_us)));
  const date::local_info info = zone_->get_info(local);
  const std::int64_t first_us = local_us - us_of(info.first.offset);
  if (info.result == date::local_info::nonexistent) return {WallTime::Kind::never, 0, 0};
  if (info.result == date::local_info::ambiguous)
    return {WallTime::Kind::twice, first_us, local_us - us_of(info.second.offset)};
  // A day's distance keeps clear of the changes at both ends.
  sure_offset_us_ = us_of(info.first.offset);
  sure_from_us_ = bounded_us(info.first.begin) + day_us;
  sure_to_us_ = bounded_us(info.first.end) - day_us;
  return {WallTime::Kind::once, first_us, 0};
}

std::string TimeZone::text(std::int64_t time_us) const {
  const date::sys_info info = info_at(zone_, time_us);
  const std::int64_t local_us = time_us + us_of(info.offset);
  if (local_us < earliest_time_us || local_us > latest_time_us) return format_time(time_us);
  std::string text = format_time(local_us);
  text.pop_back();
  text[10] = ' ';
  return text + " " + info.abbrev;
}

std::vector<ClockChange> TimeZone::changes(std::int64_t from_us, std::int64_t to_us) const {
  std::vector<ClockChange> changes;
  date::sys_info info = info_at(zone_, from_us);
  while (changes.size() < 100 && bounded_us(info.end) <= to_us && bounded_us(info.end) < latest_time_us) {
    const std::int64_t at_us = bounded_us(info.end);
    const date::sys_info after = info_at(zone_, at_us);
    const auto minutes = [](std::chrono::seconds s) { return static_cast<int>(s.count() / 60); };
    if (after.offset != info.offset) changes.push_back({at_us, minutes(info.offset), minutes(after.offset)});
    if (after.end <= info.end) break;
    info = after;
  }
  return changes;
}

}  // namespace hearthfront::server
