// What storage must know about the files themselves: who holds them, and that they are still the ones opened.
//
// Threads: a FileLock belongs to its Store; a FileGuard to the connection's thread. Failure: StorageError
// `locked` for a second holder, `io` for files that are missing, replaced or not accessible.
#pragma once

#include <sys/types.h>

#include <cstdint>
#include <string>

namespace hearthfront::storage {

// Absolute path with links resolved, so that two spellings of one file meet the same lock.
std::string canonical_path(const std::string& path);

// Exclusive advisory lock on "<database>.lock". The file stays behind on purpose: deleting it would let two
// processes each lock a file of the same name.
class FileLock {
 public:
  explicit FileLock(const std::string& database_path);
  ~FileLock();
  FileLock(const FileLock&) = delete;
  FileLock& operator=(const FileLock&) = delete;

 private:
  int descriptor_ = -1;
};

// SQLite keeps writing into a file that was deleted or moved away under it. Nobody would ever find those
// rows again, so each group of writes and each read first asks whether the names still lead to our files.
class FileGuard {
 public:
  explicit FileGuard(std::string database_path);
  void check();  // throws io
  std::int64_t wal_bytes() const;

 private:
  struct Identity {
    dev_t device = 0;
    ino_t inode = 0;
    bool known = false;
  };
  void check_one(const std::string& path, Identity& identity, bool may_be_absent) const;

  std::string path_, wal_path_;
  Identity database_, wal_;
};

}  // namespace hearthfront::storage
