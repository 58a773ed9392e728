// What a client is told when storage fails: one map from the store's faults to HTTP problems. Pure.
#pragma once

#include "server/api/http_server.h"

namespace hearthfront::storage {
class StorageError;
}

namespace hearthfront::server {

Problem storage_problem(const storage::StorageError& error);

}  // namespace hearthfront::server
