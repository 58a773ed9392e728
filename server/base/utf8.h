// Checks and repair of UTF-8 (RFC 3629: shortest form, no surrogates). Pure, any thread, no failure.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>

namespace hearthfront::server {

// Bytes of the valid character at the start of the text, 0 where there is none.
std::size_t utf8_length(std::string_view text);
bool valid_utf8(std::string_view text);

// At most `max_bytes` of the text, cut between characters. Bytes that are not UTF-8 are read as Latin-1,
// so that the result is always UTF-8.
std::string clean_text(std::string_view text, std::size_t max_bytes = 200);

}  // namespace hearthfront::server
