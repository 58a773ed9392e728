#include "server/delivery/mail_text.h"

#include <openssl/evp.h>

#include <algorithm>
#include <array>
#include <chrono>

#include "server/base/utf8.h"
#include "server/delivery/signature.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t longest_subject_bytes = 300;
constexpr std::size_t plain_subject_bytes = 60;  // fits behind "Subject: " into a line of 78 (RFC 5322 2.1.1)
constexpr std::size_t encoded_word_bytes =
    39;                                   // "Subject: =?UTF-8?B?...?=" then has 73 of the 76 of RFC 2047 2
constexpr std::size_t longest_line = 75;  // before the soft line break; RFC 2045 6.7 allows 76 in all

std::string base64(std::string_view text) {
  std::string encoded(4 * ((text.size() + 2) / 3) + 1, '\0');
  const int length =
      EVP_EncodeBlock(reinterpret_cast<unsigned char*>(encoded.data()),
                      reinterpret_cast<const unsigned char*>(text.data()), static_cast<int>(text.size()));
  encoded.resize(static_cast<std::size_t>(length));
  return encoded;
}

bool is_plain(std::string_view text) {
  return text.size() <= plain_subject_bytes && text.find("=?") == std::string_view::npos &&
         std::all_of(text.begin(), text.end(), [](char c) { return c >= 0x20 && c < 0x7f; });
}

std::string two(int number) {
  const std::string digits = std::to_string(number);
  return digits.size() < 2 ? "0" + digits : digits;
}

}  // namespace

std::string encoded_subject(std::string_view text) {
  std::string line(text);
  std::replace_if(
      line.begin(), line.end(), [](char c) { return (c >= 0 && c < 0x20) || c == 0x7f; }, ' ');
  line = clean_text(line, longest_subject_bytes);
  if (is_plain(line)) return line;
  std::string encoded;
  for (std::string_view rest = line; !rest.empty();) {
    // No character is split between two words (RFC 2047 5).
    std::size_t bytes = 0;
    while (bytes < rest.size()) {
      const std::size_t character = std::max<std::size_t>(utf8_length(rest.substr(bytes)), 1);
      if (bytes + character > encoded_word_bytes) break;
      bytes += character;
    }
    encoded += (encoded.empty() ? "=?UTF-8?B?" : "\r\n =?UTF-8?B?") + base64(rest.substr(0, bytes)) + "?=";
    rest.remove_prefix(bytes);
  }
  return encoded;
}

std::string quoted_printable(std::string_view text) {
  constexpr std::string_view digits = "0123456789ABCDEF";
  std::string out;
  std::size_t column = 0;
  for (std::size_t i = 0; i < text.size(); ++i) {
    const char c = text[i];
    if (c == '\r') continue;
    if (c == '\n') {
      out += "\r\n";
      column = 0;
      continue;
    }
    const bool ends_line = i + 1 == text.size() || text[i + 1] == '\n' || text[i + 1] == '\r';
    const bool as_is = c > 0x20 ? c < 0x7f && c != '=' : c == ' ' && !ends_line;
    const std::size_t width = as_is ? 1 : 3;
    if (column + width > longest_line) {
      out += "=\r\n";
      column = 0;
    }
    if (as_is) {
      out += c;
    } else {
      const auto byte = static_cast<unsigned char>(c);
      out += '=';
      out += digits[byte >> 4];
      out += digits[byte & 15];
    }
    column += width;
  }
  if (column != 0) out += "\r\n";
  return out;
}

std::string mail_date(std::int64_t at_s) {
  using namespace std::chrono;
  constexpr std::array days{"Sun", "Mon", "Tue", "Wed", "Thu", "Fri", "Sat"};
  constexpr std::array months{"Jan", "Feb", "Mar", "Apr", "May", "Jun",
                              "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"};
  const sys_seconds at{seconds(at_s)};
  const sys_days midnight = floor<std::chrono::days>(at);
  const year_month_day date(midnight);
  const hh_mm_ss time(at - midnight);
  return std::string(days[weekday(midnight).c_encoding()]) + ", " +
         two(static_cast<int>(unsigned{date.day()})) + " " + months[unsigned{date.month()} - 1] + " " +
         std::to_string(int{date.year()}) + " " + two(static_cast<int>(time.hours().count())) + ":" +
         two(static_cast<int>(time.minutes().count())) + ":" + two(static_cast<int>(time.seconds().count())) +
         " +0000";
}

std::string message_id_of(std::string_view key, std::string_view from) {
  const bool plain = !key.empty() && key.size() <= 100 && std::all_of(key.begin(), key.end(), [](char c) {
    return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') || c == '-' || c == '_';
  });
  std::string id = plain ? std::string(key) : sha256_hex(key);
  id += from.substr(from.rfind('@'));
  return "<" + id + ">";
}

std::string mail_text(const Mail& mail) {
  std::string recipients;
  for (const std::string& address : mail.to) recipients += (recipients.empty() ? "" : ",\r\n ") + address;
  std::string text = "Date: " + mail_date(mail.at_s) + "\r\nFrom: hearthfront <" + mail.from +
                     ">\r\nTo: " + recipients + "\r\nSubject: " + encoded_subject(mail.subject) +
                     "\r\nMessage-ID: " + mail.message_id + "\r\n";
  if (!mail.in_reply_to.empty())
    text += "In-Reply-To: " + mail.in_reply_to + "\r\nReferences: " + mail.in_reply_to + "\r\n";
  text +=
      "Auto-Submitted: auto-generated\r\nMIME-Version: 1.0\r\nContent-Type: text/plain; charset=utf-8\r\n"
      "Content-Transfer-Encoding: quoted-printable\r\n\r\n";
  return text + quoted_printable(mail.body);
}

}  // namespace hearthfront::server
