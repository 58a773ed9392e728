#include "server/api/http_text.h"

#include <algorithm>
#include <array>
#include <cstdio>

namespace hearthfront::server {
namespace {

unsigned char byte_at(std::string_view text, std::size_t index) {
  return static_cast<unsigned char>(text[index]);
}

// Length in bytes of the UTF-8 sequence at `start`, 0 where there is none.
std::size_t utf8_length(std::string_view text, std::size_t start) {
  const auto lead = byte_at(text, start);
  if (lead < 0x80) return 1;
  if (lead < 0xc2 || lead > 0xf4) return 0;
  const std::size_t length = lead < 0xe0 ? 2 : lead < 0xf0 ? 3 : 4;
  if (text.size() - start < length) return 0;
  // The second byte alone tells overlong forms, surrogates and values above U+10FFFF.
  const unsigned char low = lead == 0xe0 ? 0xa0 : lead == 0xf0 ? 0x90 : 0x80;
  const unsigned char high = lead == 0xed ? 0x9f : lead == 0xf4 ? 0x8f : 0xbf;
  if (byte_at(text, start + 1) < low || byte_at(text, start + 1) > high) return 0;
  for (std::size_t i = 2; i < length; ++i) {
    if (byte_at(text, start + i) < 0x80 || byte_at(text, start + i) > 0xbf) return 0;
  }
  return length;
}

bool is_control(char c) {
  const auto byte = static_cast<unsigned char>(c);
  return byte < 0x20 || byte == 0x7f;
}

}  // namespace

std::string lower_ascii(std::string_view text) {
  std::string result(text);
  for (char& c : result) {
    if (c >= 'A' && c <= 'Z') c = static_cast<char>(c - 'A' + 'a');
  }
  return result;
}

std::string_view trim_blanks(std::string_view text) {
  const auto first = text.find_first_not_of(" \t");
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(" \t") - first + 1);
}

bool is_token(std::string_view text) {
  constexpr std::string_view marks = "!#$%&'*+-.^_`|~";
  return !text.empty() && std::all_of(text.begin(), text.end(), [&](char c) {
    return (c >= '0' && c <= '9') || (c >= 'A' && c <= 'Z') || (c >= 'a' && c <= 'z') ||
           marks.find(c) != std::string_view::npos;
  });
}

bool is_utf8(std::string_view text) {
  for (std::size_t at = 0; at < text.size();) {
    const auto length = utf8_length(text, at);
    if (length == 0) return false;
    at += length;
  }
  return true;
}

bool has_control(std::string_view text) {
  return std::any_of(text.begin(), text.end(), is_control);
}

bool is_field_value(std::string_view text) {
  return is_utf8(text) &&
         std::none_of(text.begin(), text.end(), [](char c) { return c != '\t' && is_control(c); });
}

std::string json_quoted(std::string_view text) {
  std::string result = "\"";
  for (std::size_t at = 0; at < text.size();) {
    const auto length = utf8_length(text, at);
    const char c = text[at];
    if (length == 0) {
      result += "\xef\xbf\xbd";
    } else if (c == '"' || c == '\\') {
      result += '\\';
      result += c;
    } else if (is_control(c)) {
      std::array<char, 8> escape{};
      std::snprintf(escape.data(), escape.size(), "\\u%04x", static_cast<unsigned>(byte_at(text, at)));
      result += escape.data();
    } else {
      result.append(text.substr(at, length));
    }
    at += std::max<std::size_t>(length, 1);
  }
  return result += '"';
}

std::string http_date(std::time_t moment_s) {
  constexpr std::array<const char*, 7> days = {"Sun", "Mon", "Tue", "Wed", "Thu", "Fri", "Sat"};
  constexpr std::array<const char*, 12> months = {"Jan", "Feb", "Mar", "Apr", "May", "Jun",
                                                  "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"};
  std::tm parts{};
  gmtime_r(&moment_s, &parts);
  std::array<char, 64> text{};
  std::snprintf(text.data(), text.size(), "%s, %02d %s %04d %02d:%02d:%02d GMT",
                days.at(static_cast<std::size_t>(parts.tm_wday)), parts.tm_mday,
                months.at(static_cast<std::size_t>(parts.tm_mon)), parts.tm_year + 1900, parts.tm_hour,
                parts.tm_min, parts.tm_sec);
  return text.data();
}

}  // namespace hearthfront::server
