#include "server/live/lattice.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "solver/atmosphere/carbon_gas.h"
#include "solver/material/constants.h"

namespace hearthfront::server {
namespace {

// Below this an oxygen probe's electrolyte does not conduct well enough to be believed (common practice,
// no source); carbon transport is paused there anyway.
constexpr double probe_works_from_degc = 700.0;

double seconds(std::int64_t us) {
  return static_cast<double>(us) * 1e-6;
}

Basis worst_basis(const Coverage& coverage, double length_s) {
  constexpr double rounding_s = 1e-5;
  if (coverage.known_s() < length_s - rounding_s) return Basis::planned;
  return coverage.held_s > rounding_s ? Basis::held : Basis::measured;
}

}  // namespace

PlannedMeans planned_means(const LoadDefinition& load, std::int64_t from_us, std::int64_t to_us) {
  const double from = seconds(from_us - load.started_us), to = seconds(to_us - load.started_us);
  PlannedMeans sum;
  double start = 0;
  for (std::size_t i = 0; i < load.recipe.segments.size(); ++i) {
    const Segment& segment = load.recipe.segments[i];
    const bool last = i + 1 == load.recipe.segments.size();
    const double end = last ? std::numeric_limits<double>::infinity() : start + segment.duration_min * 60.0;
    const double overlap = std::min(end, to) - std::max(start, from);
    if (overlap > 0) {
      sum.temperature_degc += overlap * segment.temperature_degc;
      sum.carbon_potential_wt_pct += overlap * segment.carbon_potential_wt_pct;
    }
    start = end;
  }
  sum.temperature_degc /= to - from;
  sum.carbon_potential_wt_pct /= to - from;
  return sum;
}

SegmentPlace segment_at(const LoadDefinition& load, std::int64_t time_us) {
  const double at_min = seconds(time_us - load.started_us) / 60.0;
  double start = 0;
  for (std::size_t i = 0;; ++i) {
    const double end = start + load.recipe.segments[i].duration_min;
    if (at_min < end || i + 1 == load.recipe.segments.size())
      return {i, at_min - start, end - at_min, at_min >= end};
    start = end;
  }
}

LoadChannels::LoadChannels(const LoadDefinition& load) {
  for (const Channel& channel : load.furnace.channels) {
    const bool taken =
        std::any_of(used_.begin(), used_.end(), [&](const Used& u) { return u.role == channel.role; });
    if (channel.chamber != load.chamber || taken) continue;
    used_.push_back({channel.role, channel.name, channel.unit});
    series_.emplace_back(channel.gap_limit_s, channel.hold_limit_s);
  }
}

std::optional<std::int64_t> LoadChannels::replace(std::size_t used, std::int64_t from_us, std::int64_t to_us,
                                                  std::vector<Sample> samples) {
  if (used_[used].unit == Unit::degf)
    for (Sample& sample : samples) sample.value = convert(sample.value, Unit::degf, Unit::degc);
  return series_[used].replace(from_us, to_us, samples);
}

const ChannelSeries* LoadChannels::series(Role role) const {
  for (std::size_t i = 0; i < used_.size(); ++i)
    if (used_[i].role == role) return &series_[i];
  return nullptr;
}

const ChannelSeries* LoadChannels::carbon_series() const {
  const ChannelSeries* logged = series(Role::carbon_potential);
  return logged ? logged : series(Role::probe_emf);
}

IntervalInput LoadChannels::input(const LoadDefinition& load, std::int64_t from_us,
                                  std::int64_t to_us) const {
  const double length = seconds(to_us - from_us);
  const PlannedMeans planned = planned_means(load, from_us, to_us);
  const auto cover = [&](Role role) {
    const ChannelSeries* s = series(role);
    return s ? s->cover(from_us, to_us) : Coverage{};
  };
  const auto mean_or = [](const Coverage& c, double otherwise) {
    return c.known_s() > 0 ? c.integral / c.known_s() : otherwise;
  };

  IntervalInput input;
  const Coverage furnace = cover(Role::temperature);
  input.furnace_temperature_degc =
      (furnace.integral + planned.temperature_degc * (length - furnace.known_s())) / length;
  input.temperature_basis = worst_basis(furnace, length);

  const Coverage load_couple = cover(Role::load_temperature);
  if (load_couple.known_s() > 0.5 * length) input.load_temperature_degc = mean_or(load_couple, 0);

  Coverage carbon = cover(Role::carbon_potential);
  if (from_probe()) {
    carbon = cover(Role::probe_emf);
    const double probe_degc = mean_or(cover(Role::probe_temperature), input.furnace_temperature_degc);
    const double co = mean_or(cover(Role::co), load.furnace.co_fraction * 100.0) / 100.0;
    const double emf_mv = mean_or(carbon, 0);
    double potential = planned.carbon_potential_wt_pct;
    if (probe_degc >= probe_works_from_degc && co > 0) {
      const double probe_k = probe_degc + solver::zero_celsius_k;
      const solver::CarbonGas gas{co, load.furnace.h2_fraction, load.furnace.total_pressure_bar};
      potential =
          solver::carbon_potential_wt_pct(solver::carbon_activity_from_emf(emf_mv, probe_k, gas), probe_k);
    }
    carbon.integral = potential * carbon.known_s();
  }
  input.carbon_potential_wt_pct =
      (carbon.integral + planned.carbon_potential_wt_pct * (length - carbon.known_s())) / length;
  input.carbon_potential_basis = worst_basis(carbon, length);
  return input;
}

std::optional<std::int64_t> LoadChannels::complete_until_us(std::int64_t now_us) const {
  std::optional<std::int64_t> until;
  for (const ChannelSeries* s : {series(Role::temperature), carbon_series()}) {
    const auto newest = s ? s->newest(now_us) : std::nullopt;
    if (!newest) return std::nullopt;
    until = until ? std::min(*until, newest->time_us) : newest->time_us;
  }
  return until;
}

std::optional<std::int64_t> LoadChannels::newest_us(std::int64_t now_us) const {
  std::optional<std::int64_t> newest;
  for (const ChannelSeries& s : series_)
    if (const auto sample = s.newest(now_us))
      newest = std::max(newest.value_or(sample->time_us), sample->time_us);
  return newest;
}

std::int64_t LoadChannels::reach_us() const {
  std::int64_t reach = 0;
  for (const ChannelSeries& s : series_) reach = std::max(reach, s.reach_us());
  return reach;
}

}  // namespace hearthfront::server
