// The dashboard's files and the API description, built into the binary. Immutable.
#pragma once

#include <string>
#include <string_view>

namespace hearthfront::server {

struct Asset {
  std::string_view path;  // "/index.html"
  std::string_view body;
};

// Null where there is no such file.
const Asset* find_asset(std::string_view path);
std::string content_type_of(std::string_view path);

}  // namespace hearthfront::server
