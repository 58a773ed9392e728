// The query of a paged list: limit and cursor. Throw Problem (422).
#pragma once

#include <cstdint>

#include "server/api/http_server.h"

namespace hearthfront::server {

int limit_from(const Request& request);            // 1 to 200; 50 where left out
std::int64_t cursor_from(const Request& request);  // 0 where left out

}  // namespace hearthfront::server
