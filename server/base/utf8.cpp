#include "server/base/utf8.h"

#include <algorithm>

namespace hearthfront::server {

std::size_t utf8_length(std::string_view text) {
  if (text.empty()) return 0;
  const auto byte = [&](std::size_t i) -> unsigned {
    return i < text.size() ? static_cast<unsigned char>(text[i]) : 0;
  };
  const auto follows = [&](std::size_t i) { return (byte(i) & 0xc0u) == 0x80u; };
  const unsigned first = byte(0);
  if (first < 0x80) return 1;
  if (first >= 0xc2 && first <= 0xdf) return follows(1) ? 2 : 0;
  if (first >= 0xe0 && first <= 0xef) {
    const bool overlong = first == 0xe0 && byte(1) < 0xa0, surrogate = first == 0xed && byte(1) > 0x9f;
    return follows(1) && follows(2) && !overlong && !surrogate ? 3 : 0;
  }
  if (first >= 0xf0 && first <= 0xf4) {
    const bool overlong = first == 0xf0 && byte(1) < 0x90, beyond = first == 0xf4 && byte(1) > 0x8f;
    return follows(1) && follows(2) && follows(3) && !overlong && !beyond ? 4 : 0;
  }
  return 0;
}

bool valid_utf8(std::string_view text) {
  while (!text.empty()) {
    const std::size_t length = utf8_length(text);
    if (length == 0) return false;
    text.remove_prefix(length);
  }
  return true;
}

std::string clean_text(std::string_view text, std::size_t max_bytes) {
  const auto is_ascii = [](char c) { return static_cast<unsigned char>(c) < 0x80; };
  if (text.size() <= max_bytes && std::all_of(text.begin(), text.end(), is_ascii)) return std::string(text);
  std::string clean;
  clean.reserve(std::min(text.size(), max_bytes));
  while (!text.empty()) {
    const std::size_t length = utf8_length(text);
    if (clean.size() + std::max<std::size_t>(length, length == 0 ? 2 : 1) > max_bytes) break;
    if (length > 0) {
      clean += text.substr(0, length);
      text.remove_prefix(length);
      continue;
    }
    const auto latin1 = static_cast<unsigned char>(text.front());
    clean += static_cast<char>(0xc0u | (latin1 >> 6));
    clean += static_cast<char>(0x80u | (latin1 & 0x3fu));
    text.remove_prefix(1);
  }
  return clean;
}

}  // namespace hearthfront::server
