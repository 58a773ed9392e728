// `hearthfront feed`: sends a logger's file to a running daemon over its public API, row by row as the
// daemon's own clock reaches them (or all at once), so that a log can be shown as if it were being written
// now. One call, one file; runs on the caller's thread plus one that waits for signals, and blocks SIGINT and
// SIGTERM in the caller for its duration. Trouble with the daemon is waited out and told once; nothing is
// skipped.
#pragma once

#include <string>

namespace hearthfront::server {

struct FeedOptions {
  std::string address = "127.0.0.1";  // loopback only: the API has no sign-in and no TLS yet
  int port = 8473;
  std::string plant_path, steels_path;  // the daemon's own files: they hold the mapping
  std::string furnace;                  // id
  std::string mapping;                  // name of one of the furnace's csv mappings
  std::string file;                     // the log
  bool at_once = false;                 // do not wait for the daemon's clock
  bool follow = false;                  // at the end of the file wait for more instead of ending
};

// Exit code: 0 all sent, or stopped by SIGINT or SIGTERM (within a second); 1 the log cannot be read or the
// daemon refuses it for good; 2 the options do not fit the plant file. Messages go to stdout and stderr.
// Readings that the daemon refuses or finds in conflict are told with their line; they do not stop the feed.
int run_feed(const FeedOptions& options);

}  // namespace hearthfront::server
