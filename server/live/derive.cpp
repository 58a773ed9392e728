#include "server/live/derive.h"

namespace hearthfront::server {

TimeSpan reading_span(const LiveLoad& load) {
  return {load.readings_from_us(), readings_until_us(load.definition())};
}

void read_again(LiveLoad& load, const ReadingSource& source, std::size_t used, std::int64_t from_us,
                std::int64_t to_us) {
  const auto& channel = load.channels().used()[used];
  const TimeSpan whole = reading_span(load);
  if (source.marks) {
    // Marks of the definition (a load file's) stand beside those of the store.
    auto marks = source.marks(channel, whole.from_us, whole.to_us);
    for (const MaskSpan& mask : load.definition().masks)
      if (mask.furnace == channel.furnace && mask.channel == channel.name)
        marks.push_back({mask.from_us, mask.to_us});
    load.set_marks(used, std::move(marks));
  }
  load.replace_readings(used, from_us, to_us, source.readings(channel, from_us, to_us));
}

void read_all(LiveLoad& load, const ReadingSource& source) {
  const TimeSpan whole = reading_span(load);
  for (std::size_t i = 0; i < load.channels().used().size(); ++i)
    read_again(load, source, i, whole.from_us, whole.to_us);
}

std::unique_ptr<LiveLoad> derive(std::shared_ptr<const LoadDefinition> definition,
                                 const ReadingSource& source, std::int64_t now_us, Members members) {
  auto load = std::make_unique<LiveLoad>(std::move(definition));
  read_all(*load, source);
  load->advance_to(now_us);
  if (members == Members::with) load->bring_members_up();
  return load;
}

}  // namespace hearthfront::server
