// Wraps a handler so that a failing store becomes a problem answer instead of a 500.
#pragma once

#include <utility>

#include "server/api/http_server.h"
#include "server/ingest/storage_problem.h"
#include "storage/store.h"

namespace hearthfront::server {

template <typename Handler>
HttpServer::Handler guarded(Handler handler) {
  return [handler = std::move(handler)](const Request& request) {
    try {
      return handler(request);
    } catch (const storage::StorageError& error) {
      throw storage_problem(error);
    }
  };
}

// Storage calls a clash of loads or revisions misuse; to a client it is a conflict of state.
template <typename Call>
auto as_conflict(const char* type, const char* title, Call call) {
  try {
    return call();
  } catch (const storage::StorageError& error) {
    if (error.fault == storage::StorageFault::misuse) throw Problem{409, type, title, error.what(), ""};
    throw;
  }
}

inline constexpr const char* invalid_request = "invalid-request";

}  // namespace hearthfront::server
