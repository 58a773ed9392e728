#include <cstdio>

#include "server/base/settings.h"
#include "server/command/commands.h"
#include "server/command/feed.h"

namespace hearthfront::server {

int run_feed_with(const std::string& settings_path, FeedOptions options) {
  ConfigErrors errors;
  const Settings settings = read_settings(settings_path, errors);
  for (const std::string& message : errors.messages) std::fprintf(stderr, "%s\n", message.c_str());
  if (!errors.ok()) return exit_bad_input;
  options.address = settings.listen.address;
  options.port = settings.listen.port;
  options.plant_path = settings.path_of(settings.files.plant);
  options.steels_path = settings.path_of(settings.files.steels);
  return run_feed(options);
}

}  // namespace hearthfront::server
