// The head of one request (RFC 9112), checked strictly: whatever two readers could read in two ways is
// refused, so that neither a proxy in front nor the library behind sees another request than we do.
// Pure, any thread, owns nothing. Failure is a thrown Problem with status 400, 411, 413, 414, 415 or 431.
#pragma once

#include <cstddef>
#include <map>
#include <string>
#include <string_view>

#include "server/api/http_server.h"

namespace hearthfront::server {

struct RequestHead {
  std::string method;  // any token; which are served is the router's matter
  std::string target;  // "/path?query", percent-encoding valid, without encoded slash or NUL
  std::map<std::string, std::string> headers;
  std::size_t content_length = 0;
  bool keep_alive = true;
  bool expects_continue = false;

  std::string_view header(const std::string& lower_name) const;  // empty where missing
};

// Looks for the end of the head in a growing buffer without reading any byte twice.
class HeadScanner {
 public:
  // Bytes of the head with its blank line, 0 while it is unfinished. Throws Problem as soon as the bytes
  // cannot become an acceptable head.
  std::size_t scan(std::string_view buffer, std::size_t max_head_bytes);

 private:
  std::size_t scanned_ = 0;
  std::size_t line_start_ = 0;
  bool request_line_seen_ = false;
};

RequestHead parse_head(std::string_view head, const HttpLimits& limits);

}  // namespace hearthfront::server
