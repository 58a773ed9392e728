#include "server/live/channel_health.h"

#include <algorithm>
#include <cmath>
#include <cstdio>

#include "server/base/number_text.h"

namespace hearthfront::server {
namespace {

constexpr std::int64_t minute_us = 60'000'000;
constexpr std::int64_t recent_us = 30 * minute_us;
constexpr std::size_t enough = 12;  // readings to judge scatter by
constexpr double steady_k_per_min = 0.5, drift_k = 15;

struct Limits {
  double noise;          // standard deviation of single readings
  double slope_per_min;  // of the instrument's value
};

std::optional<Limits> limits_of(Role role, Unit unit) {
  const double kelvin = unit == Unit::degf ? 1.8 : 1.0;
  switch (role) {
    case Role::temperature:
    case Role::load_temperature:
    case Role::probe_temperature:
      return Limits{4 * kelvin, 80 * kelvin};
    case Role::dew_point:
      return Limits{1.5 * kelvin, 15 * kelvin};
    case Role::probe_emf:
      return Limits{8, 150};
    case Role::carbon_potential:
      return Limits{0.06, 0.4};
    case Role::co:
    case Role::h2:
      return Limits{0.8, 8};
    case Role::co2:
      return Limits{0.03, 0.3};
    case Role::pressure:
    case Role::push:
      break;
  }
  return std::nullopt;
}

std::vector<Sample> since(const std::vector<Sample>& samples, std::int64_t from_us) {
  const auto first =
      std::find_if(samples.begin(), samples.end(), [&](const Sample& s) { return s.time_us >= from_us; });
  return {first, samples.end()};
}

std::optional<double> median_interval_s(const std::vector<Sample>& samples) {
  std::vector<std::int64_t> steps;
  for (std::size_t i = 1; i < samples.size(); ++i)
    steps.push_back(samples[i].time_us - samples[i - 1].time_us);
  if (steps.empty()) return std::nullopt;
  std::nth_element(steps.begin(), steps.begin() + static_cast<std::ptrdiff_t>(steps.size() / 2), steps.end());
  return static_cast<double>(steps[steps.size() / 2]) * 1e-6;
}

// Scatter of single readings about a smooth course: second differences of white noise have variance 6 s^2.
double noise(const std::vector<Sample>& samples) {
  double sum = 0;
  for (std::size_t i = 2; i < samples.size(); ++i) {
    const double second = samples[i].value - 2 * samples[i - 1].value + samples[i - 2].value;
    sum += second * second;
  }
  return std::sqrt(sum / (6.0 * static_cast<double>(samples.size() - 2)));
}

// Since when the newest value has stood still, where that is longer than standing still is usual for this
// channel: a controller that logs whole degrees stands still for minutes and is well.
std::optional<std::int64_t> stuck_since(const std::vector<Sample>& samples) {
  std::int64_t longest_before = 0;
  std::size_t start = 0, runs = 0;
  for (std::size_t i = 1; i <= samples.size(); ++i) {
    if (i < samples.size() && samples[i].value == samples[start].value) continue;
    if (i == samples.size()) break;
    longest_before = std::max(longest_before, samples[i - 1].time_us - samples[start].time_us);
    start = i;
    ++runs;
  }
  const std::int64_t standing = samples.back().time_us - samples[start].time_us;
  const bool long_enough =
      samples.size() - start >= enough && standing >= std::max(recent_us, 3 * longest_before);
  return runs >= 5 && long_enough ? std::optional(samples[start].time_us) : std::nullopt;
}

double slope_per_min(const std::vector<Sample>& samples) {
  if (samples.size() < 2) return 0;
  const double minutes = static_cast<double>(samples.back().time_us - samples.front().time_us) / 60e6;
  return minutes > 0 ? (samples.back().value - samples.front().value) / minutes : 0;
}

double mean(const std::vector<Sample>& samples) {
  double sum = 0;
  for (const Sample& sample : samples) sum += sample.value;
  return sum / static_cast<double>(samples.size());
}

std::string minutes_text(std::int64_t span_us) {
  return std::to_string(std::max<std::int64_t>(1, span_us / minute_us)) + " min";
}

std::string with_unit(double value, Unit unit) {
  char line[64];
  std::snprintf(line, sizeof line, "%.3g %s", value, std::string(text(unit)).c_str());
  return line;
}

}  // namespace

const char* text(Health health) {
  switch (health) {
    case Health::good:
      return "good";
    case Health::silent:
      return "silent";
    case Health::gap:
      return "gap";
    case Health::stuck:
      return "stuck";
    case Health::noisy:
      return "noisy";
    case Health::jumping:
      return "jumping";
    case Health::drifting:
      return "drifting";
    case Health::masked:
      return "masked";
  }
  return "";
}

ChannelHealth judge(const Channel& channel, const std::vector<Sample>& samples,
                    const std::vector<TimeSpan>& marks, const std::optional<Partner>& partner,
                    std::int64_t now_us) {
  ChannelHealth result;
  result.typical_interval_s = median_interval_s(samples);
  const auto say = [&](Health health, const std::string& sentence, std::optional<std::int64_t> since_us) {
    result.health = health;
    result.sentence = sentence;
    result.since_us = since_us;
    return result;
  };
  if (samples.empty())
    return say(Health::silent, "No reading in the last 4 hours: check the logger and its line.",
               std::nullopt);
  const Sample& last = samples.back();
  const double age_s = static_cast<double>(now_us - last.time_us) * 1e-6;
  // A push contact speaks only when something happens.
  if (channel.role == Role::push) return say(Health::good, "Speaks when the line is pushed.", std::nullopt);
  if (age_s > channel.hold_limit_s)
    return say(Health::silent,
               "Silent for " + minutes_text(now_us - last.time_us) + ": check the logger and its line.",
               last.time_us);
  if (age_s > channel.gap_limit_s)
    return say(Health::gap,
               "No reading for " + minutes_text(now_us - last.time_us) + ": its last value is carried.",
               last.time_us);
  for (const TimeSpan& mark : marks)
    if (mark.from_us <= last.time_us && last.time_us <= mark.to_us)
      return say(Health::masked, "Its readings are set aside now: burn-off, purge or calibration.",
                 mark.from_us);
  if (const auto since_us = stuck_since(samples))
    return say(Health::stuck,
               "Has stood at exactly " + with_unit(last.value, channel.unit) + " for " +
                   minutes_text(last.time_us - *since_us) + ": check the instrument.",
               since_us);

  const std::vector<Sample> recent = since(samples, now_us - recent_us);
  const auto limits = limits_of(channel.role, channel.unit);
  for (std::size_t i = 1; limits && i < recent.size(); ++i) {
    const double minutes = static_cast<double>(recent[i].time_us - recent[i - 1].time_us) / 60e6;
    const double step = recent[i].value - recent[i - 1].value;
    if (std::fabs(step) > limits->slope_per_min * std::max(minutes, 1.0))
      return say(Health::jumping,
                 "Changed by " + with_unit(step, channel.unit) + " within " +
                     minutes_text(recent[i].time_us - recent[i - 1].time_us) +
                     ", faster than a furnace can: check connection and range.",
                 recent[i].time_us);
  }
  if (limits && recent.size() >= enough && noise(recent) > limits->noise)
    return say(Health::noisy,
               "Scatters by " + with_unit(noise(recent), channel.unit) +
                   " from reading to reading: check shielding and contact.",
               recent.front().time_us);
  if (partner && recent.size() >= enough) {
    const std::vector<Sample> other = since(partner->samples, now_us - recent_us);
    const double kelvin = channel.unit == Unit::degf ? 1.8 : 1.0;
    const bool steady = other.size() >= enough &&
                        std::fabs(slope_per_min(recent)) < steady_k_per_min * kelvin &&
                        std::fabs(slope_per_min(other)) < steady_k_per_min * kelvin;
    if (steady && std::fabs(mean(recent) - mean(other)) > drift_k * kelvin)
      return say(Health::drifting,
                 "Both stand still, yet " + with_unit(mean(recent) - mean(other), channel.unit) +
                     " apart from " + partner->name + ": one of the two thermocouples is wrong.",
                 recent.front().time_us);
  }
  return result;
}

}  // namespace hearthfront::server
