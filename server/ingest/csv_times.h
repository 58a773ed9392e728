// Instants of rows from what the wall clock showed, changes of the clocks included. A local time that does
// not exist is refused. One that comes twice is told by the order of the file: where its rows run through the
// hour, step back once and run through it again, the first pass is before the change and the second after it;
// otherwise the rows of that hour are refused, never guessed. One thread.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "server/base/csv_mapping.h"
#include "server/base/time_text.h"
#include "server/base/time_zone.h"

namespace hearthfront::server {

class RowTimes {
 public:
  explicit RowTimes(const CsvMapping& mapping);  // must outlive it

  // Whether the rows must be looked through in their order before their times are asked for.
  bool needs_order() const { return zone_.has_value(); }
  // For each row in its order from 0, then the end of the file.
  void look_at(int row, std::string_view text);
  void end();

  // The instant of the row; empty with `reason`.
  std::optional<std::int64_t> instant(int row, std::string_view text, std::string& reason);

  const std::optional<TimeZone>& zone() const { return zone_; }

 private:
  struct Doubled {
    int row = 0;
    std::int64_t local_us = 0, first_us = 0, second_us = 0;
  };
  void settle(std::optional<std::int64_t> after_us);
  std::optional<std::size_t> second_pass(std::optional<std::int64_t> after_us) const;

  const CsvMapping& mapping_;
  std::optional<TimeZone> zone_;
  std::optional<std::int64_t> before_us_;  // the instant before the doubled rows now collected
  std::vector<Doubled> doubled_;
  std::vector<std::pair<int, std::int64_t>> settled_;  // row and instant, ascending
};

}  // namespace hearthfront::server
