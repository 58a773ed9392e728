// Decodes the target of a request that http_head accepted: path and query, percent-encoding resolved.
// Pure, any thread. Failure is a thrown Problem with status 400.
#pragma once

#include <map>
#include <string>
#include <string_view>

namespace hearthfront::server {

struct Target {
  std::string path;                          // UTF-8, no control characters, no "." or ".." segment
  std::map<std::string, std::string> query;  // application/x-www-form-urlencoded, each name once
};
Target decode_target(std::string_view target);

}  // namespace hearthfront::server
