#include "server/live/series.h"

#include <algorithm>
#include <bit>
#include <cmath>
#include <iterator>
#include <limits>

namespace hearthfront::server {
namespace {

bool before(const Sample& sample, std::int64_t time_us) {
  return sample.time_us < time_us;
}
bool after(std::int64_t time_us, const Sample& sample) {
  return time_us < sample.time_us;
}

double seconds(std::int64_t us) {
  return static_cast<double>(us) * 1e-6;
}

bool same(const Sample& a, const Sample& b) {
  return a.time_us == b.time_us &&
         std::bit_cast<std::uint64_t>(a.value) == std::bit_cast<std::uint64_t>(b.value);
}

}  // namespace

const char* text(Basis basis) {
  switch (basis) {
    case Basis::measured:
      return "measured";
    case Basis::held:
      return "held";
    case Basis::planned:
      return "planned";
    case Basis::masked:
      return "masked";
  }
  return "";
}

ChannelSeries::ChannelSeries(double gap_limit_s, double hold_limit_s, std::optional<MaskRule> rule)
    : gap_us_(std::llround(gap_limit_s * 1e6)), hold_us_(std::llround(hold_limit_s * 1e6)), rule_(rule) {}

std::optional<std::int64_t> ChannelSeries::replace(std::int64_t from_us, std::int64_t to_us,
                                                   const std::vector<Sample>& samples) {
  const auto first = std::lower_bound(all_.begin(), all_.end(), from_us, before);
  const auto last = std::upper_bound(first, all_.end(), to_us, after);
  // The first sample that differs, on either side.
  auto old = first;
  auto fresh = samples.begin();
  while (old != last && fresh != samples.end() && same(*old, *fresh)) ++old, ++fresh;
  if (old == last && fresh == samples.end()) return std::nullopt;
  std::int64_t changed = std::numeric_limits<std::int64_t>::max();
  if (old != last) changed = std::min(changed, old->time_us);
  if (fresh != samples.end()) changed = std::min(changed, fresh->time_us);

  std::vector<Sample> merged;
  merged.reserve(all_.size() + samples.size());
  merged.insert(merged.end(), all_.begin(), first);
  merged.insert(merged.end(), samples.begin(), samples.end());
  merged.insert(merged.end(), last, all_.end());
  all_ = std::move(merged);
  return settle(changed);
}

std::optional<std::int64_t> ChannelSeries::set_marks(std::vector<TimeSpan> marks) {
  if (marks == marks_) return std::nullopt;
  marks_ = std::move(marks);
  return settle(std::nullopt);
}

// Brings masks and samples up to what is known now. `changed`: the first reading that differs, if any.
// Returns from when on the series speaks differently.
std::optional<std::int64_t> ChannelSeries::settle(std::optional<std::int64_t> changed) {
  auto masks = find_masks();
  for (std::size_t i = 0; i < std::max(masks.size(), masks_.size()); ++i) {
    if (i < masks.size() && i < masks_.size() && masks[i] == masks_[i]) continue;
    for (const auto* list : {&masks, &masks_})
      if (i < list->size()) changed = std::min(changed.value_or((*list)[i].from_us), (*list)[i].from_us);
    break;
  }
  masks_ = std::move(masks);
  samples_.clear();
  auto mask = masks_.begin();
  for (const Sample& sample : all_) {
    while (mask != masks_.end() && mask->to_us < sample.time_us) ++mask;
    if (mask == masks_.end() || sample.time_us < mask->from_us) samples_.push_back(sample);
  }
  if (!changed) return std::nullopt;
  // The line that led to it began at the reading before.
  const auto next = std::lower_bound(samples_.begin(), samples_.end(), *changed, before);
  return next == samples_.begin() ? changed : std::min(*changed, std::prev(next)->time_us);
}

std::vector<TimeSpan> ChannelSeries::find_masks() const {
  std::vector<TimeSpan> found = marks_;
  const std::int64_t longest_us = rule_ ? std::llround(rule_->longest_s * 1e6) : 0;
  for (std::size_t i = 1; rule_ && i < all_.size(); ++i) {
    const Sample& good = all_[i - 1];
    if (all_[i].time_us - good.time_us > gap_us_ || !(all_[i].value < rule_->fall_to * good.value)) continue;
    std::size_t back = i;
    while (back < all_.size() && all_[back].value < rule_->return_to * good.value) ++back;
    const bool still = back == all_.size();
    const std::int64_t end_us = still ? all_.back().time_us : all_[back].time_us;
    // One that does not come back in time is no burn-off: the gas or the probe itself has changed.
    if (end_us - good.time_us > longest_us) continue;
    found.push_back({good.time_us + 1, still ? end_us + gap_us_ : end_us - 1});
    i = back;
  }
  std::sort(found.begin(), found.end(), [](const TimeSpan& a, const TimeSpan& b) {
    return std::pair(a.from_us, a.to_us) < std::pair(b.from_us, b.to_us);
  });
  std::vector<TimeSpan> merged;
  for (const TimeSpan& span : found) {
    if (!merged.empty() && span.from_us <= merged.back().to_us)
      merged.back().to_us = std::max(merged.back().to_us, span.to_us);
    else
      merged.push_back(span);
  }
  return merged;
}

// Calls visit(basis, from, to, value at from, value at to) for the pieces of [from, to] in order, silent
// pieces included (as planned, without value). A piece is cut where a mask begins or ends.
template <typename Visit>
void ChannelSeries::visit(std::int64_t from_us, std::int64_t to_us, Visit visit) const {
  auto emit = [&](Basis basis, std::int64_t a, std::int64_t b, double va, double vb) {
    const std::int64_t from = std::max(a, from_us), to = std::min(b, to_us);
    if (from >= to) return;
    const double slope = b > a ? (vb - va) / seconds(b - a) : 0.0;
    const auto piece = [&](Basis as, std::int64_t begin, std::int64_t end) {
      if (begin < end) visit(as, begin, end, va + slope * seconds(begin - a), va + slope * seconds(end - a));
    };
    std::int64_t done = from;
    for (const TimeSpan& mask : masks_) {
      if (basis == Basis::planned || mask.to_us <= done || mask.from_us >= to) continue;
      piece(basis, done, std::max(done, mask.from_us));
      done = std::max(done, mask.from_us);
      piece(Basis::masked, done, std::min(to, mask.to_us));
      done = std::min(to, mask.to_us);
    }
    piece(basis, done, to);
  };
  auto it = std::upper_bound(samples_.begin(), samples_.end(), from_us, after);
  if (it == samples_.begin()) {
    emit(Basis::planned, from_us, it == samples_.end() ? to_us : it->time_us, 0, 0);
    if (it == samples_.end()) return;
    ++it;
  }
  for (--it; it != samples_.end() && it->time_us < to_us; ++it) {
    const auto next = std::next(it);
    const std::int64_t t = it->time_us;
    if (next != samples_.end() && next->time_us - t <= gap_us_) {
      emit(Basis::measured, t, next->time_us, it->value, next->value);
      continue;
    }
    const std::int64_t end = next == samples_.end() ? std::max(to_us, t) : next->time_us;
    const std::int64_t gap = std::min(end, t + gap_us_);
    const std::int64_t hold = std::min(end, t + std::max(gap_us_, hold_us_));
    emit(Basis::measured, t, gap, it->value, it->value);
    emit(Basis::held, gap, hold, it->value, it->value);
    emit(Basis::planned, hold, end, 0, 0);
  }
}

Coverage ChannelSeries::cover(std::int64_t from_us, std::int64_t to_us) const {
  Coverage coverage;
  visit(from_us, to_us, [&](Basis basis, std::int64_t from, std::int64_t to, double a, double b) {
    if (basis == Basis::planned) return;
    const double length = seconds(to - from);
    (basis == Basis::measured ? coverage.measured_s
     : basis == Basis::held   ? coverage.held_s
                              : coverage.masked_s) += length;
    coverage.integral += 0.5 * (a + b) * length;
  });
  return coverage;
}

std::vector<BasisSpan> ChannelSeries::spans(std::int64_t from_us, std::int64_t to_us) const {
  std::vector<BasisSpan> spans;
  visit(from_us, to_us, [&](Basis basis, std::int64_t from, std::int64_t to, double, double) {
    if (!spans.empty() && spans.back().basis == basis && spans.back().to_us == from)
      spans.back().to_us = to;
    else
      spans.push_back({basis, from, to});
  });
  return spans;
}

namespace {

std::optional<Sample> newest_of(const std::vector<Sample>& samples, std::int64_t at_us) {
  const auto it = std::upper_bound(samples.begin(), samples.end(), at_us, after);
  if (it == samples.begin()) return std::nullopt;
  return *std::prev(it);
}

}  // namespace

std::optional<Sample> ChannelSeries::newest(std::int64_t at_us) const {
  return newest_of(samples_, at_us);
}

std::optional<Sample> ChannelSeries::newest_logged(std::int64_t at_us) const {
  return newest_of(all_, at_us);
}

}  // namespace hearthfront::server
