// One channel's accepted readings along a load, and what they say about a stretch of time.
//
// A reading speaks for the time up to the next one where that comes within the channel's gap limit: the
// value between them is the straight line. Where it does not, the value is carried: as measured up to the
// gap limit after the reading, as `held` up to the hold limit, and after that the channel says nothing
// (the caller uses the recipe: `planned`). All of it depends on the set of readings alone, never on when
// they came.
#pragma once

#include <cstdint>
#include <optional>
#include <vector>

namespace hearthfront::server {

enum class Basis : std::uint8_t { measured, held, planned, masked };
const char* text(Basis basis);

struct Sample {
  std::int64_t time_us = 0;
  double value = 0;
};

struct Coverage {
  double measured_s = 0, held_s = 0, masked_s = 0;
  double integral = 0;  // of the value over all three, value x s
  double known_s() const { return measured_s + held_s + masked_s; }
};

struct TimeSpan {
  std::int64_t from_us = 0, to_us = 0;  // both ends belong to it
  bool operator==(const TimeSpan&) const = default;
};

// How a channel shows by itself that it measures something else than the furnace: its value falls below
// `fall_to` times the value before and is back above `return_to` times it within `longest_s`.
struct MaskRule {
  double fall_to = 0, return_to = 0, longest_s = 0;
};
// A probe in air (burn-off, purge) and an analyser on zero gas (calibration); common practice, no source.
inline constexpr MaskRule probe_in_air{0.87, 0.95, 1800};
inline constexpr MaskRule analyser_on_zero_gas{0.2, 0.8, 1800};

struct BasisSpan {
  Basis basis = Basis::measured;
  std::int64_t from_us = 0, to_us = 0;
};

class ChannelSeries {
 public:
  ChannelSeries(double gap_limit_s, double hold_limit_s, std::optional<MaskRule> rule = std::nullopt);

  // Replaces what is known in [from, to] by `samples` (ascending, inside the span). Returns the earliest
  // time at which the series now speaks differently, if any.
  std::optional<std::int64_t> replace(std::int64_t from_us, std::int64_t to_us,
                                      const std::vector<Sample>& samples);

  // Replaces the stretches that people marked; returns as replace does.
  std::optional<std::int64_t> set_marks(std::vector<TimeSpan> marks);
  // Marked and recognised stretches, ascending, merged where they touch.
  const std::vector<TimeSpan>& masks() const { return masks_; }

  Coverage cover(std::int64_t from_us, std::int64_t to_us) const;
  // Touching spans of one basis are merged; what the channel is silent about is `planned`.
  std::vector<BasisSpan> spans(std::int64_t from_us, std::int64_t to_us) const;
  // The newest sample at or before `at_us`; `newest_logged` also of the masked ones.
  std::optional<Sample> newest(std::int64_t at_us) const;
  std::optional<Sample> newest_logged(std::int64_t at_us) const;
  const std::vector<Sample>& samples() const { return samples_; }
  std::int64_t reach_us() const {
    return gap_us_ > hold_us_ ? gap_us_ : hold_us_;
  }  // how far a reading can speak
  bool empty() const { return all_.empty(); }

 private:
  template <typename Visit>
  void visit(std::int64_t from_us, std::int64_t to_us, Visit visit) const;

  std::vector<TimeSpan> find_masks() const;
  std::optional<std::int64_t> settle(std::optional<std::int64_t> changed);

  std::int64_t gap_us_, hold_us_;
  std::optional<MaskRule> rule_;
  std::vector<Sample> all_, samples_;  // samples_: without those in masks
  std::vector<TimeSpan> marks_, masks_;
};

}  // namespace hearthfront::server
