// What a client is told when storage fails. Source: RFC 9110 (409, 503), RFC 4918 section 11.5 (507),
// RFC 9457 (type and title).
#include "server/ingest/storage_problem.h"

#include <doctest/doctest.h>

#include <set>

#include "storage/store.h"

using namespace hearthfront::server;
using hearthfront::storage::StorageError;
using hearthfront::storage::StorageFault;

TEST_CASE("each fault of the store has its status, type and advice, and tells nothing of paths") {
  struct Row {
    StorageFault fault;
    int status;
    std::string type;
  };
  const Row rows[] = {
      {StorageFault::busy, 503, "busy"},
      {StorageFault::closing, 503, "stopping"},
      {StorageFault::full, 507, "disk-full"},
      {StorageFault::unknown_fate, 503, "store-refuses-writes"},
      {StorageFault::io, 503, "storage-failure"},
      {StorageFault::corrupt, 503, "storage-damaged"},
      {StorageFault::newer_schema, 503, "storage-unavailable"},
      {StorageFault::locked, 503, "storage-unavailable"},
  };
  for (const Row& row : rows) {
    CAPTURE(row.type);
    const Problem problem = storage_problem(StorageError(row.fault, "/secret/path: cause"));
    CHECK(problem.status == row.status);
    CHECK(problem.type == row.type);
    CHECK(!problem.title.empty());
    CHECK(problem.detail.find("secret") == std::string::npos);
    CHECK(problem.detail.size() > 30);
  }
  const Problem misuse =
      storage_problem(StorageError(StorageFault::misuse, "Another load is in that chamber."));
  CHECK(misuse.status == 409);
  CHECK(misuse.detail == "Another load is in that chamber.");
}
