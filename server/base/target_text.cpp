#include "server/base/target_text.h"

#include <arpa/inet.h>

#include <algorithm>
#include <charconv>
#include <string_view>

namespace hearthfront::server {
namespace {

bool is_letter_or_digit(char c) {
  return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9');
}

bool is_ipv6(const std::string& host) {
  in6_addr six{};
  return inet_pton(AF_INET6, host.c_str(), &six) == 1;
}

std::string_view after_scheme(std::string_view url) {
  for (const std::string_view scheme : {"http://", "https://"})
    if (url.starts_with(scheme)) return url.substr(scheme.size());
  return {};
}

bool is_port(std::string_view text) {
  int port = 0;
  const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), port);
  return error == std::errc{} && end == text.data() + text.size() && port >= 1 && port <= 65'535;
}

}  // namespace

bool is_host_name(const std::string& host) {
  if (is_ipv6(host)) return true;
  if (host.empty() || host.size() > 253) return false;
  std::size_t label = 0;
  for (std::size_t i = 0; i <= host.size(); ++i) {
    if (i == host.size() || host[i] == '.') {
      if (label == 0 || label > 63 || host[i - 1] == '-' || host[i - label] == '-') return false;
      label = 0;
    } else if (is_letter_or_digit(host[i]) || host[i] == '-') {
      ++label;
    } else {
      return false;
    }
  }
  return true;
}

bool is_loopback_host(const std::string& host) {
  in_addr four{};
  in6_addr six{};
  if (inet_pton(AF_INET, host.c_str(), &four) == 1) return ntohl(four.s_addr) >> 24 == 127;
  if (inet_pton(AF_INET6, host.c_str(), &six) == 1) return IN6_IS_ADDR_LOOPBACK(&six);
  return host == "localhost";
}

bool is_mail_address(const std::string& address) {
  const std::size_t at = address.find('@');
  if (at == std::string::npos || at == 0 || at > 64 || address.size() > 254) return false;
  char before = '.';
  for (std::size_t i = 0; i < at; ++i) {
    const char c = address[i];
    // atext of RFC 5322 3.2.3
    const bool atom =
        is_letter_or_digit(c) || std::string_view("!#$%&'*+-/=?^_`{|}~").find(c) != std::string::npos;
    if (!atom && !(c == '.' && before != '.')) return false;
    before = c;
  }
  const std::string domain = address.substr(at + 1);
  return before != '.' && is_host_name(domain) && !is_ipv6(domain);
}

std::string url_fault(const std::string& url) {
  const std::string expected = "expected an address such as \"https://alarms.example/hook\"";
  const bool plain = std::all_of(url.begin(), url.end(), [](char c) {
    return c > 0x20 && c < 0x7f && std::string_view("\"<>\\^`{|}#").find(c) == std::string_view::npos;
  });
  if (!plain) return expected + "; other characters must be percent-encoded, and # leads nowhere here";
  const std::string_view rest = after_scheme(url);
  const std::string_view authority = rest.substr(0, rest.find_first_of("/?"));
  if (authority.empty()) return expected + " that begins with http:// or https://";
  if (authority.find('@') != std::string_view::npos)
    return "must not hold a user or password: nothing secret belongs into the settings; messages are signed "
           "with the "
           "key in secret_file";
  std::string host(authority);
  std::string_view port;
  if (authority.front() == '[') {
    const std::size_t close = authority.find(']');
    if (close == std::string_view::npos) return expected;
    host = authority.substr(1, close - 1);
    port = authority.substr(close + 1);
    if (!is_ipv6(host)) return expected;
  } else if (const std::size_t colon = authority.find(':'); colon != std::string_view::npos) {
    host = authority.substr(0, colon);
    port = authority.substr(colon);
  }
  if (!is_host_name(host)) return expected + ", got host \"" + host + "\"";
  if (!port.empty() && !(port.front() == ':' && is_port(port.substr(1))))
    return expected + ", got port \"" + std::string(port) + "\"";
  return "";
}

std::string shown_url(const std::string& url) {
  const std::string_view rest = after_scheme(url);
  return std::string(rest.substr(0, rest.find('?')));
}

}  // namespace hearthfront::server
