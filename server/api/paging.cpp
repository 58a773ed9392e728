#include "server/api/paging.h"

#include <charconv>

#include "server/api/route_guard.h"

namespace hearthfront::server {

int limit_from(const Request& request) {
  const auto it = request.query.find("limit");
  if (it == request.query.end()) return 50;
  int limit = 0;
  const char* end = it->second.data() + it->second.size();
  if (std::from_chars(it->second.data(), end, limit).ptr != end || limit < 1 || limit > 200)
    throw Problem{422, invalid_request, "The limit cannot be used",
                  "limit: expected a whole number from 1 to 200.", "limit"};
  return limit;
}

std::int64_t cursor_from(const Request& request) {
  const auto it = request.query.find("cursor");
  if (it == request.query.end()) return 0;
  std::int64_t cursor = 0;
  const char* end = it->second.data() + it->second.size();
  if (std::from_chars(it->second.data(), end, cursor).ptr != end || cursor < 1)
    throw Problem{422, invalid_request, "The cursor cannot be used",
                  "cursor: take next_cursor of the page before, unchanged.", "cursor"};
  return cursor;
}

}  // namespace hearthfront::server
