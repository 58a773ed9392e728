#include "server/live/stored_health.h"

#include <optional>
#include <vector>

namespace hearthfront::server {
namespace {

std::vector<Sample> recent_samples(storage::Reader& reader, std::int64_t channel, std::int64_t now_us) {
  std::vector<Sample> samples;
  for (const storage::Reading& reading : reader.accepted(channel, now_us - health_window_us, now_us))
    samples.push_back({reading.time_us, reading.value});
  return samples;
}

// Furnace and load thermocouple of one chamber stand beside each other.
const Channel* partner_of(const Furnace& furnace, const Channel& channel) {
  if (channel.role != Role::load_temperature) return nullptr;
  for (const Channel& other : furnace.channels)
    if (other.role == Role::temperature && other.chamber == channel.chamber) return &other;
  return nullptr;
}

}  // namespace

ChannelHealth stored_health(const Furnace& furnace, const Channel& channel, const ChannelId& id,
                            storage::Reader& reader, std::int64_t now_us) {
  const std::int64_t own = id(furnace.id, channel.name);
  std::vector<TimeSpan> marks;
  for (const storage::MaskRow& mask : reader.masks(own, now_us - health_window_us, now_us))
    if (!mask.withdrawn) marks.push_back({mask.from_us, mask.to_us});
  std::optional<Partner> partner;
  if (const Channel* other = partner_of(furnace, channel)) {
    partner = Partner{other->name, recent_samples(reader, id(furnace.id, other->name), now_us)};
    for (Sample& sample : partner->samples) sample.value = convert(sample.value, other->unit, channel.unit);
  }
  return judge(channel, recent_samples(reader, own, now_us), marks, partner, now_us);
}

}  // namespace hearthfront::server
