// How webhook messages are signed. Pure, any thread.
#pragma once

#include <cstdint>
#include <string>
#include <string_view>

namespace hearthfront::server {

// HMAC-SHA-256 (RFC 2104 with FIPS 180-4) in 64 small hexadecimal digits. An empty key is allowed.
std::string hmac_sha256_hex(std::string_view key, std::string_view data);
// SHA-256 in 64 small hexadecimal digits.
std::string sha256_hex(std::string_view data);
// "sha256=" and the HMAC of the timestamp (s since 1970-01-01 UTC, decimal), a dot and the body.
std::string webhook_signature(std::string_view key, std::int64_t timestamp_s, std::string_view body);

}  // namespace hearthfront::server
