#include "server/ingest/csv_times.h"

#include <algorithm>

#include "server/base/time_format.h"

namespace hearthfront::server {
namespace {

constexpr std::int64_t hour_us = 3'600'000'000;

}  // namespace

RowTimes::RowTimes(const CsvMapping& mapping) : mapping_(mapping) {
  if (!mapping.time_zone.empty()) zone_.emplace(mapping.time_zone);
}

void RowTimes::look_at(int row, std::string_view text) {
  std::string reason;
  const std::optional<WrittenTime> written = parse_written_time(text, mapping_.time_format, reason);
  if (!written || !zone_) return;
  const WallTime wall =
      written->has_zone ? WallTime{WallTime::Kind::once, written->us, 0} : zone_->at(written->us);
  if (wall.kind == WallTime::Kind::never) return;
  if (wall.kind == WallTime::Kind::twice) {
    // Another year's hour right behind this one.
    if (!doubled_.empty() && std::abs(written->us - doubled_.back().local_us) > 3 * hour_us)
      settle(wall.first_us);
    doubled_.push_back({row, written->us, wall.first_us, wall.second_us});
    return;
  }
  if (!doubled_.empty()) settle(wall.first_us);
  before_us_ = wall.first_us;
}

void RowTimes::end() {
  if (!doubled_.empty()) settle({});
}

// Where in doubled_ the second pass begins.
std::optional<std::size_t> RowTimes::second_pass(std::optional<std::int64_t> after_us) const {
  std::vector<std::int64_t> steps;
  std::size_t back = 0, backs = 0;
  for (std::size_t i = 1; i < doubled_.size(); ++i) {
    const std::int64_t step = doubled_[i].local_us - doubled_[i - 1].local_us;
    if (step > 0) steps.push_back(step);
    if (step < 0) {
      back = i;
      ++backs;
    }
  }
  // A logger with one row in an hour or more shows the same time twice instead of a step back.
  const bool one_each = doubled_.size() == 2 && doubled_[0].local_us == doubled_[1].local_us;
  if (backs == 0 && one_each && before_us_ && after_us) {
    back = backs = 1;
  }
  if (backs != 1) return {};
  const std::int64_t last_us = doubled_.back().second_us, first_us = doubled_.front().first_us;
  if ((before_us_ && *before_us_ > first_us) || (after_us && *after_us < last_us)) return {};
  // Two rows in the wrong order step back as well; the change of the clocks is no longer a step than others.
  const std::int64_t across_us = doubled_[back].second_us - doubled_[back - 1].first_us;
  if (across_us <= 0) return {};
  if (!steps.empty()) {
    const auto middle = steps.begin() + static_cast<std::ptrdiff_t>(steps.size() / 2);
    std::nth_element(steps.begin(), middle, steps.end());
    if (across_us > 5 * *middle) return {};
  }
  return back;
}

void RowTimes::settle(std::optional<std::int64_t> after_us) {
  if (const std::optional<std::size_t> back = second_pass(after_us)) {
    for (std::size_t i = 0; i < doubled_.size(); ++i)
      settled_.emplace_back(doubled_[i].row, i < *back ? doubled_[i].first_us : doubled_[i].second_us);
  }
  before_us_ = doubled_.back().first_us;
  doubled_.clear();
}

std::optional<std::int64_t> RowTimes::instant(int row, std::string_view text, std::string& reason) {
  const std::optional<WrittenTime> written = parse_written_time(text, mapping_.time_format, reason);
  if (!written) return {};
  if (written->has_zone || !zone_) return instant_of(*written, mapping_.utc_offset_min, reason);
  const WallTime wall = zone_->at(written->us);
  switch (wall.kind) {
    case WallTime::Kind::once:
      return instant_of({wall.first_us, true}, 0, reason);
    case WallTime::Kind::never:
      reason = "this time did not exist in " + zone_->name() + ": the clocks went forward over it";
      return {};
    case WallTime::Kind::twice:
      break;
  }
  const auto found = std::lower_bound(settled_.begin(), settled_.end(), std::pair(row, INT64_MIN));
  if (found != settled_.end() && found->first == row) return found->second;
  reason = "this time came twice in " + zone_->name() +
           " when the clocks went back, and the rows of the file do not run forward through both hours, so "
           "which is "
           "meant cannot be told; send both hours in one file, or let the logger write UTC";
  return {};
}

}  // namespace hearthfront::server
