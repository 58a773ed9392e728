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

}  // namespace hearthfront::server
