// The subcommands of the one binary. Each returns the process's exit code:
//   0 done   1 failed at its work (the message says how)   2 the settings, plant or input file is wrong
#pragma once

#include <string>
#include <vector>

namespace hearthfront::server {

inline constexpr int exit_done = 0;
inline constexpr int exit_failed = 1;
inline constexpr int exit_bad_input = 2;

// Runs the daemon until SIGINT or SIGTERM.
int run_serve(const std::string& settings_path);

// Proves settings, plant and steel files without opening anything; prints every fault.
int run_check(const std::string& settings_path);

struct ReplayOptions {
  std::string plant_path, steels_path, load_path, mapping;
  // "FILE" for the furnace where the load began, "FURNACE=FILE" for another on its path.
  std::vector<std::string> logs;
  bool json = false;
};
// Runs a load on its log files, without daemon or database, and prints its result.
int run_replay(const ReplayOptions& options);

// Fills in what the daemon's own settings say (address, port, plant and steel files), then run_feed.
struct FeedOptions;
int run_feed_with(const std::string& settings_path, FeedOptions options);

}  // namespace hearthfront::server
