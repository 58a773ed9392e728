#include "server/delivery/signature.h"

#include <openssl/evp.h>
#include <openssl/hmac.h>

#include <array>
#include <span>
#include <stdexcept>

namespace hearthfront::server {
namespace {

using Digest = std::array<unsigned char, EVP_MAX_MD_SIZE>;

std::string hex(std::span<const unsigned char> bytes) {
  constexpr std::string_view digits = "0123456789abcdef";
  std::string text;
  for (const unsigned char byte : bytes) {
    text += digits[byte >> 4];
    text += digits[byte & 15];
  }
  return text;
}

const unsigned char* bytes_of(std::string_view text) {
  return reinterpret_cast<const unsigned char*>(text.data());
}

}  // namespace

std::string hmac_sha256_hex(std::string_view key, std::string_view data) {
  Digest digest{};
  unsigned length = 0;
  // A null key would mean "the one before" to the library.
  const char* const key_bytes = key.empty() ? "" : key.data();
  if (HMAC(EVP_sha256(), key_bytes, static_cast<int>(key.size()), bytes_of(data), data.size(), digest.data(),
           &length) == nullptr)
    throw std::runtime_error("HMAC-SHA-256 is not available from this OpenSSL");
  return hex(std::span(digest).first(length));
}

std::string sha256_hex(std::string_view data) {
  Digest digest{};
  unsigned length = 0;
  if (EVP_Digest(data.data(), data.size(), digest.data(), &length, EVP_sha256(), nullptr) != 1)
    throw std::runtime_error("SHA-256 is not available from this OpenSSL");
  return hex(std::span(digest).first(length));
}

std::string webhook_signature(std::string_view key, std::int64_t timestamp_s, std::string_view body) {
  std::string signed_text = std::to_string(timestamp_s) + ".";
  signed_text += body;
  return "sha256=" + hmac_sha256_hex(key, signed_text);
}

}  // namespace hearthfront::server
