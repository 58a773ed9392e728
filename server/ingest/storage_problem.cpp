#include "server/ingest/storage_problem.h"

#include "storage/store.h"

namespace hearthfront::server {

Problem storage_problem(const storage::StorageError& error) {
  using storage::StorageFault;
  switch (error.fault) {
    case StorageFault::busy:
      return {503,
              "busy",
              "The store is busy",
              "Too much waits for the disk. Send it again in a few seconds.",
              {}};
    case StorageFault::closing:
      return {503,
              "stopping",
              "The daemon is stopping",
              "Send it again in a few seconds, after the restart.",
              {}};
    case StorageFault::full:
      return {507,
              "disk-full",
              "The disk is full",
              "Nothing more can be stored. Free space where the database lies, then send it again.",
              {}};
    case StorageFault::unknown_fate:
      return {503,
              "store-refuses-writes",
              "The store takes no more writes",
              "A write to the disk failed, so what is on it is not known. Keep the data, restart the daemon, "
              "then send it again: what was stored already counts as duplicate.",
              {}};
    case StorageFault::io:
      return {503,
              "storage-failure",
              "The disk reported an error",
              "Keep the data and send it again; if it stays so, look into the log and check the disk.",
              {}};
    case StorageFault::corrupt:
      return {503,
              "storage-damaged",
              "The database is damaged",
              "Keep the data. Stop the daemon and restore the database from a backup; the log says more.",
              {}};
    case StorageFault::newer_schema:
    case StorageFault::locked:
      return {503,
              "storage-unavailable",
              "The database cannot be used",
              "Another program or another version of the daemon holds it; the log says more.",
              {}};
    case StorageFault::misuse:
      return {409, "conflict", "The store refuses this change", error.what(), {}};
  }
  return {500, "storage-failure", "The store failed", "The log says more.", {}};
}

}  // namespace hearthfront::server
