// Local clocks of a time zone by the IANA database of the system (Debian: tzdata), changes of the clocks
// included. An object belongs to one thread; the database behind it is shared and read once. Transitions are
// known up to 2037, beyond which winter time is assumed.
#pragma once

#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

namespace date {
class time_zone;
}

namespace hearthfront::server {

// What a local time on the wall means. Microseconds since 1970-01-01.
struct WallTime {
  enum class Kind { once, never, twice };
  Kind kind = Kind::once;
  std::int64_t first_us = 0;   // UTC; of twice: before the clocks went back
  std::int64_t second_us = 0;  // UTC; of twice: after it
};

struct ClockChange {
  std::int64_t at_us = 0;             // UTC
  int before_min = 0, after_min = 0;  // offsets east of Greenwich
};

class TimeZone {
 public:
  // Throws std::invalid_argument for a name that the database does not have.
  explicit TimeZone(const std::string& name);

  static bool is_known(const std::string& name);
  static std::vector<std::string> names();

  // `local_us`: the clock on the wall, counted as though it were UTC.
  WallTime at(std::int64_t local_us);
  // Wall clock with the zone's abbreviation: "2026-03-02 07:05:00 CET"; a fraction where there is one.
  std::string text(std::int64_t time_us) const;
  std::vector<ClockChange> changes(std::int64_t from_us, std::int64_t to_us) const;

  const std::string& name() const { return name_; }

 private:
  std::string name_;
  const date::time_zone* zone_;  // kept by the library for ever
  // Wall times in here have this offset and no other: saves most look-ups.
  std::int64_t sure_from_us_ = 0, sure_to_us_ = -1, sure_offset_us_ = 0;
};

}  // namespace hearthfront::server
