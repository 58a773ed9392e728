#include <cstdio>

#include "server/base/settings.h"
#include "server/command/commands.h"
#include "server/delivery/routing.h"
#include "server/delivery/sender.h"

namespace hearthfront::server {

int run_check(const std::string& settings_path) {
  ConfigErrors errors;
  const Settings settings = read_settings(settings_path, errors);
  const Plant plant =
      read_plant(settings.path_of(settings.files.plant), settings.path_of(settings.files.steels), errors);
  if (errors.ok()) check_clock_is_allowed(settings, plant, errors);
  if (errors.ok()) check_targets(settings.targets, plant, alert_kinds(), errors);
  for (const std::string& message : errors.messages) std::fprintf(stderr, "%s\n", message.c_str());
  if (!errors.ok()) {
    std::fprintf(stderr, "%zu fault%s found; nothing was opened.\n", errors.messages.size(),
                 errors.messages.size() == 1 ? "" : "s");
    return exit_bad_input;
  }
  // No reason not to start: the daemon says so again, and the file may come later.
  for (const DeliveryTarget& target : settings.targets)
    if (const std::string fault = make_sender(target)->fault(); !fault.empty())
      std::fprintf(stderr, "Target \"%s\" cannot be told anything yet: %s\n", target.name.c_str(),
                   fault.c_str());
  std::printf("All good: %s, %zu furnaces, %zu steels; would listen on %s:%d, database %s\n",
              plant.name.c_str(), plant.furnaces.size(), plant.steels.size(), settings.listen.address.c_str(),
              settings.listen.port, settings.path_of(settings.files.database).c_str());
  return exit_done;
}

}  // namespace hearthfront::server
