// Strict reading of JSON objects: exact types, ranges, no unknown members, every fault a Problem that
// names the member. Only .cpp files that decode JSON include this header (it brings nlohmann's).
#pragma once

#include <cstdint>
#include <nlohmann/json.hpp>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "server/api/http_server.h"

namespace hearthfront::server {

using Json = nlohmann::ordered_json;

// As text; bytes that are not UTF-8 become U+FFFD instead of an exception.
std::string dumped(const Json& json);

// Parses a request body: depth at most 32, no repeated members. Throws Problem (400, broken-json).
Json parse_body(std::string_view body);

// One object and where it stands in the document. Every getter removes its member from the list of
// unread ones; finish() refuses what is left. Faults are thrown as Problem{422, problem_type}.
class JsonFields {
 public:
  JsonFields(const Json& object, std::string path, std::string problem_type);

  // Whether it is there with a value; a member that is null counts as left out.
  bool has(std::string_view name);
  std::string word(std::string_view name,
                   std::size_t max_length);  // 1..max characters, no control characters
  double number(std::string_view name, double low, double high, std::string_view unit);
  int integer(std::string_view name, int low, int high);
  std::int64_t time(std::string_view name);  // RFC 3339
  const Json& array(std::string_view name, std::size_t min_size, std::size_t max_size);
  const Json& object(std::string_view name);
  const Json& any(std::string_view name);
  bool flag(std::string_view name);
  std::string path_of(std::string_view name) const;
  [[noreturn]] void fail(std::string_view name, const std::string& detail) const;
  void finish() const;

 private:
  const Json& take(std::string_view name);
  const Json& object_;
  std::string path_, type_;
  std::vector<std::string> unread_;
};

}  // namespace hearthfront::server
