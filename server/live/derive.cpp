#include "server/live/derive.h"

namespace hearthfront::server {

void read_all(LiveLoad& load, const ReadingSource& source) {
  const auto& used = load.channels().used();
  const std::int64_t from = load.readings_from_us(), to = readings_until_us(load.definition());
  for (std::size_t i = 0; i < used.size(); ++i)
    load.replace_readings(i, from, to, source(used[i].name, from, to));
}

std::unique_ptr<LiveLoad> derive(std::shared_ptr<const LoadDefinition> definition,
                                 const ReadingSource& source, std::int64_t now_us) {
  auto load = std::make_unique<LiveLoad>(std::move(definition));
  read_all(*load, source);
  load->advance_to(now_us);
  return load;
}

}  // namespace hearthfront::server
