// What addresses of targets may look like. Pure functions, any thread. Stricter than the standards on
// purpose: what passes can stand in a protocol line or a header without quoting.
#pragma once

#include <string>

namespace hearthfront::server {

// Host name (letters, digits, - and dots, RFC 1123 2.1) or an IP address, IPv6 without brackets.
bool is_host_name(const std::string& host);
// localhost, 127.0.0.0/8 or ::1: what no other machine can listen to.
bool is_loopback_host(const std::string& host);
// An addr-spec whose local part is a dot-atom (RFC 5322 3.4.1); no display name, no comments, no quotes.
bool is_mail_address(const std::string& address);
// Why it is no http or https address for a webhook; empty where it is one.
std::string url_fault(const std::string& url);
// For people: without scheme and query, which may hold a token.
std::string shown_url(const std::string& url);

}  // namespace hearthfront::server
