#include "server/api/http_target.h"

#include <charconv>

#include "server/api/http_server.h"
#include "server/api/http_text.h"

namespace hearthfront::server {
namespace {

[[noreturn]] void malformed(std::string detail) {
  throw Problem{400, "malformed-request", "The address is not valid", std::move(detail), {}};
}

// Every % is followed by two hexadecimal digits here: http_head saw to it.
std::string decode(std::string_view text, bool plus_is_blank) {
  std::string result;
  result.reserve(text.size());
  for (std::size_t at = 0; at < text.size(); ++at) {
    if (text[at] == '%' && text.size() - at > 2) {
      unsigned value = 0;
      std::from_chars(text.data() + at + 1, text.data() + at + 3, value, 16);
      result += static_cast<char>(value);
      at += 2;
    } else {
      result += plus_is_blank && text[at] == '+' ? ' ' : text[at];
    }
  }
  // Line ends and the like are no use in an address, and would travel into logs.
  if (!is_utf8(result) || has_control(result)) malformed("It holds control characters or is not UTF-8.");
  return result;
}

}  // namespace

Target decode_target(std::string_view target) {
  Target result;
  const auto question = target.find('?');
  result.path = decode(target.substr(0, question), false);
  for_each_part(result.path, '/', [](std::string_view segment) {
    if (segment == "." || segment == "..") malformed("The path holds a dot segment.");
  });
  if (question == std::string_view::npos) return result;
  for_each_part(target.substr(question + 1), '&', [&](std::string_view pair) {
    const auto equals = pair.find('=');
    auto name = decode(pair.substr(0, equals), true);
    auto value = equals == std::string_view::npos ? std::string{} : decode(pair.substr(equals + 1), true);
    if (!result.query.emplace(name, std::move(value)).second)
      malformed("The query gives " + name + " more than once.");
  });
  return result;
}

}  // namespace hearthfront::server
