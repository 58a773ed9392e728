#include "server/api/http_head.h"

#include <array>
#include <charconv>
#include <utility>

#include "server/api/http_text.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t max_fields = 100;

[[noreturn]] void refuse(int status, const char* type, const char* title, std::string detail) {
  throw Problem{status, type, title, std::move(detail), {}};
}

[[noreturn]] void malformed(std::string detail) {
  refuse(400, "malformed-request", "The request is not valid HTTP", std::move(detail));
}

[[noreturn]] void line_too_long(std::size_t max_bytes) {
  refuse(414, "address-too-long", "The address is too long",
         "The request line may have " + std::to_string(max_bytes) + " bytes. Send long input in a body.");
}

int hex_value(char c) {
  if (c >= '0' && c <= '9') return c - '0';
  if (c >= 'a' && c <= 'f') return c - 'a' + 10;
  if (c >= 'A' && c <= 'F') return c - 'A' + 10;
  return -1;
}

// The library decodes whatever it can and keeps the rest; only encodings with one meaning may reach it.
void check_target(std::string_view target) {
  bool in_path = true;
  for (std::size_t at = 0; at < target.size(); ++at) {
    const char c = target[at];
    if (c <= ' ' || c >= 0x7f || c == '#' || c == '\\') {
      malformed("The address holds a character that must be percent-encoded.");
    }
    if (c == '?') in_path = false;
    if (c != '%') continue;
    const int high = at + 1 < target.size() ? hex_value(target[at + 1]) : -1;
    const int low = at + 2 < target.size() ? hex_value(target[at + 2]) : -1;
    if (high < 0 || low < 0) malformed("The address holds a % without two hexadecimal digits.");
    const int value = high * 16 + low;
    if (value == 0 || (in_path && (value == '/' || value == '\\'))) {
      malformed("The address holds an encoded slash, backslash or NUL.");
    }
  }
}

// RFC 9112 3.2.2: a server accepts the absolute form; its authority then stands for the Host field, which
// must be there all the same (3.2).
void take_absolute_form(RequestHead& head) {
  constexpr std::string_view scheme = "http://";
  if (lower_ascii(std::string_view(head.target).substr(0, scheme.size())) != scheme) return;
  const auto path = head.target.find_first_of("/?", scheme.size());
  head.headers["host"] = head.target.substr(scheme.size(), path - scheme.size());
  head.target = path == std::string::npos ? "/" : head.target.substr(path);
  if (head.target.front() == '?') head.target.insert(0, "/");
}

bool parse_request_line(std::string_view line, RequestHead& head) {
  const auto first = line.find(' ');
  const auto last = line.rfind(' ');
  if (first == std::string_view::npos || first == last)
    malformed("The request line needs method, address, version.");
  const auto version = line.substr(last + 1);
  head.method = line.substr(0, first);
  head.target = line.substr(first + 1, last - first - 1);
  if (!is_token(head.method)) malformed("The method is not a word.");
  if (version != "HTTP/1.1" && version != "HTTP/1.0")
    malformed("Only HTTP/1.1 and HTTP/1.0 are spoken here.");
  check_target(head.target);
  return version == "HTTP/1.1";
}

void add_field(std::string_view line, RequestHead& head) {
  // A second value of one of these would mean two things at once.
  constexpr std::array<std::string_view, 9> single = {"host",   "content-length", "content-type",
                                                      "origin", "authorization",  "if-match",
                                                      "expect", "cookie",         "transfer-encoding"};
  const auto colon = line.find(':');
  // Also refuses folded lines and blanks before the colon, as RFC 9112 5.1 and 5.2 ask.
  if (colon == std::string_view::npos || !is_token(line.substr(0, colon)))
    malformed("A header line is broken.");
  const auto name = lower_ascii(line.substr(0, colon));
  const auto value = trim_blanks(line.substr(colon + 1));
  if (!is_field_value(value)) malformed("The header " + name + " holds control characters or is not UTF-8.");
  const auto [place, fresh] = head.headers.try_emplace(name, value);
  if (fresh) return;
  for (const auto one : single) {
    if (name == one) malformed("The header " + name + " may be given once.");
  }
  place->second.append(", ").append(value);
}

std::size_t parse_length(std::string_view text, std::size_t max_bytes) {
  std::size_t length = 0;
  const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), length);
  const bool digits = !text.empty() && text.find_first_not_of("0123456789") == std::string_view::npos;
  if (!digits) malformed("Content-Length must be a whole number of bytes.");
  if (error != std::errc() || end != text.data() + text.size() || length > max_bytes) {
    refuse(413, "body-too-large", "The body is too large",
           "A body may have " + std::to_string(max_bytes) + " bytes. Send it in smaller parts.");
  }
  return length;
}

void check_framing(RequestHead& head, bool http11, const HttpLimits& limits) {
  if (head.headers.count("transfer-encoding") != 0) {
    refuse(411, "length-required", "The length of the body must be given",
           "Transfer-Encoding is not accepted. Send Content-Length.");
  }
  if (const auto found = head.headers.find("content-length"); found != head.headers.end()) {
    head.content_length = parse_length(found->second, limits.max_body_bytes);
  }
  const auto encoding = lower_ascii(head.header("content-encoding"));
  if (!encoding.empty() && encoding != "identity") {
    refuse(415, "encoding-not-supported", "Compressed bodies are not accepted",
           "Send the body without encoding.");
  }
  const bool bodiless = head.method == "GET" || head.method == "HEAD" || head.method == "TRACE";
  if (bodiless && head.content_length > 0) malformed("A " + head.method + " request carries no body.");

  head.keep_alive = http11;
  for_each_part(head.header("connection"), ',', [&](std::string_view part) {
    if (lower_ascii(part) == "close") head.keep_alive = false;
  });
  head.expects_continue = http11 && lower_ascii(head.header("expect")) == "100-continue";
}

}  // namespace

std::string_view RequestHead::header(const std::string& lower_name) const {
  const auto found = headers.find(lower_name);
  return found == headers.end() ? std::string_view{} : std::string_view(found->second);
}

std::size_t HeadScanner::scan(std::string_view buffer, std::size_t max_head_bytes) {
  const std::size_t max_line_bytes = max_head_bytes / 2;
  for (; scanned_ < buffer.size(); ++scanned_) {
    if (scanned_ >= max_head_bytes) {
      refuse(431, "head-too-large", "The headers are too large",
             "Request line and headers may have " + std::to_string(max_head_bytes) + " bytes together.");
    }
    const char c = buffer[scanned_];
    if (!request_line_seen_) {
      // Says at once to a TLS client that it knocked at the wrong door, instead of letting it wait.
      if (scanned_ == 0 && (static_cast<unsigned char>(c) < 0x20 && c != '\r')) {
        malformed("This port speaks plain HTTP.");
      }
      if (scanned_ - line_start_ >= max_line_bytes) line_too_long(max_line_bytes);
    }
    if (c != '\n') continue;
    if (scanned_ == line_start_ || buffer[scanned_ - 1] != '\r') malformed("A line must end with CR LF.");
    const bool blank = scanned_ - line_start_ == 1;
    line_start_ = scanned_ + 1;
    if (!blank) {
      request_line_seen_ = true;
    } else if (request_line_seen_) {
      return ++scanned_;
    }
    // A blank line before the request line is skipped (RFC 9112 2.2).
  }
  return 0;
}

RequestHead parse_head(std::string_view head, const HttpLimits& limits) {
  RequestHead result;
  bool first = true;
  bool http11 = false;
  std::size_t fields = 0;
  while (!head.empty()) {
    const auto end = head.find("\r\n");
    const auto line = head.substr(0, end);
    head.remove_prefix(end == std::string_view::npos ? head.size() : end + 2);
    if (line.empty()) continue;
    if (first) {
      http11 = parse_request_line(line, result);
      first = false;
    } else if (++fields > max_fields) {
      refuse(431, "head-too-large", "The headers are too large",
             "At most " + std::to_string(max_fields) + " headers are accepted.");
    } else {
      add_field(line, result);
    }
  }
  if (http11 && result.headers.count("host") == 0) malformed("The Host header is missing.");
  take_absolute_form(result);
  if (result.target.empty() || result.target.front() != '/')
    malformed("The address must begin with a slash.");
  check_framing(result, http11, limits);
  return result;
}

}  // namespace hearthfront::server
