// Small text rules of HTTP and JSON that the front needs before any library sees the bytes: tokens, field
// values, UTF-8, JSON strings, dates. Pure functions, any thread, no failure.
#pragma once

#include <ctime>
#include <string>
#include <string_view>

namespace hearthfront::server {

std::string lower_ascii(std::string_view text);
std::string_view trim_blanks(std::string_view text);  // spaces and tabs at both ends

bool is_token(std::string_view text);        // RFC 9110 5.6.2; not empty
bool is_utf8(std::string_view text);         // RFC 3629: shortest form, no surrogates
bool has_control(std::string_view text);     // any byte below 0x20, or 0x7f
bool is_field_value(std::string_view text);  // one line: UTF-8, no control but tab

// `text` as a JSON string with its quotes (RFC 8259 7). Bytes that are no UTF-8 become U+FFFD.
std::string json_quoted(std::string_view text);

// The moment as an IMF-fixdate (RFC 9110 5.6.7), whatever the locale.
std::string http_date(std::time_t moment_s);

// Calls `take` for each part between separators, blanks trimmed, empty parts skipped.
template <class Take>
void for_each_part(std::string_view list, char separator, Take take) {
  while (true) {
    const auto end = list.find(separator);
    const auto part = trim_blanks(list.substr(0, end));
    if (!part.empty()) take(part);
    if (end == std::string_view::npos) return;
    list.remove_prefix(end + 1);
  }
}

}  // namespace hearthfront::server
