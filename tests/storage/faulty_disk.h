// A disk that can be made to fail, for the process's SQLite connections: a layer over SQLite's default file
// system (sqlite.org/vfs.html) that counts writes, truncations and syncs, fails a chosen one once, and keeps
// beside it what a power cut would leave: only the bytes that were synced.
//
// Threads: any. One at a time; while it lives, it is SQLite's default file system.
#pragma once

#include <string>

namespace hearthfront::storage::test {

enum class DiskFault { write_error, no_space, sync_error };

class FaultyDisk {
 public:
  // Watches the files in `folder`; `synced_folder` ("" = none) receives what is durable.
  explicit FaultyDisk(std::string folder, std::string synced_folder = "");
  ~FaultyDisk();
  FaultyDisk(const FaultyDisk&) = delete;
  FaultyDisk& operator=(const FaultyDisk&) = delete;

  // From now on, the `nth` call (from 1) that `fault` can hit fails, once; only on files whose path ends
  // with `suffix`.
  void arm(DiskFault fault, int nth, std::string suffix = "");
  void disarm();
  bool struck() const;  // whether the armed fault has happened
  long syncs() const;   // successful ones so far
};

}  // namespace hearthfront::storage::test
