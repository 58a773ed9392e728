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

ChannelSeries::ChannelSeries(double gap_limit_s, double hold_limit_s)
    : gap_us_(std::llround(gap_limit_s * 1e6)), hold_us_(std::llround(hold_limit_s * 1e6)) {}

std::optional<std::int64_t> ChannelSeries::replace(std::int64_t from_us, std::int64_t to_us,
                                                   const std::vector<Sample>& samples) {
  const auto first = std::lower_bound(samples_.begin(), samples_.end(), from_us, before);
  const auto last = std::upper_bound(first, samples_.end(), to_us, after);
  // The first sample that differs, on either side.
  auto old = first;
  auto fresh = samples.begin();
  while (old != last && fresh != samples.end() && same(*old, *fresh)) ++old, ++fresh;
  if (old == last && fresh == samples.end()) return std::nullopt;
  std::int64_t changed = std::numeric_limits<std::int64_t>::max();
  if (old != last) changed = std::min(changed, old->time_us);
  if (fresh != samples.end()) changed = std::min(changed, fresh->time_us);
  // The line that led to it began at the reading before.
  const auto next = std::lower_bound(samples_.begin(), samples_.end(), changed, before);
  if (next != samples_.begin()) changed = std::prev(next)->time_us;

  std::vector<Sample> merged;
  merged.reserve(samples_.size() + samples.size());
  merged.insert(merged.end(), samples_.begin(), first);
  merged.insert(merged.end(), samples.begin(), samples.end());
  merged.insert(merged.end(), last, samples_.end());
  samples_ = std::move(merged);
  return changed;
}

// Calls visit(basis, from, to, value at from, value at to) for the pieces of [from, to] in order, silent
// pieces included (as planned, without value).
template <typename Visit>
void ChannelSeries::visit(std::int64_t from_us, std::int64_t to_us, Visit visit) const {
  auto emit = [&](Basis basis, std::int64_t a, std::int64_t b, double va, double vb) {
    const std::int64_t from = std::max(a, from_us), to = std::min(b, to_us);
    if (from >= to) return;
    const double slope = b > a ? (vb - va) / seconds(b - a) : 0.0;
    visit(basis, from, to, va + slope * seconds(from - a), va + slope * seconds(to - a));
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
    (basis == Basis::measured ? coverage.measured_s : coverage.held_s) += length;
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

std::optional<Sample> ChannelSeries::newest(std::int64_t at_us) const {
  const auto it = std::upper_bound(samples_.begin(), samples_.end(), at_us, after);
  if (it == samples_.begin()) return std::nullopt;
  return *std::prev(it);
}

}  // namespace hearthfront::server
