// Signatures of webhook messages against published vectors and against another implementation.
#include <doctest/doctest.h>

#include <string>

#include "server/delivery/signature.h"

using namespace hearthfront::server;

TEST_CASE("HMAC-SHA-256 gives the values of RFC 4231") {
  struct Vector {
    std::string key, data, hmac;
  };
  std::string counting;
  for (char c = 1; c <= 25; ++c) counting += c;
  // RFC 4231 sections 4.2 to 4.5, 4.7 and 4.8 (4.6 is about a cut value).
  const Vector vectors[] = {
      {std::string(20, '\x0b'), "Hi There",
       "b0344c61d8db38535ca8afceaf0bf12b881dc200c9833da726e9376c2e32cff7"},
      {"Jefe", "what do ya want for nothing?",
       "5bdcc146bf60754e6a042426089575c75a003f089d2739839dec58b964ec3843"},
      {std::string(20, '\xaa'), std::string(50, '\xdd'),
       "773ea91e36800e46854db8ebd09181a72959098b3ef8c122d9635514ced565fe"},
      {counting, std::string(50, '\xcd'), "82558a389a443c0ea4cc819899f2083a85f0faa3e578f8077a2e3ff46729665b"},
      {std::string(131, '\xaa'), "Test Using Larger Than Block-Size Key - Hash Key First",
       "60e431591ee0b67f0d8a26aacbf5b77f8e0bc6213728c5140546040f0ee37f54"},
      {std::string(131, '\xaa'),
       "This is a test using a larger than block-size key and a larger than block-size data. The key needs "
       "to be "
       "hashed before being used by the HMAC algorithm.",
       "9b09ffa71b942fcb27635fbcd5b0e944bfdc63644f0713938a7f51535c3a35e2"},
  };
  for (const Vector& vector : vectors) CHECK(hmac_sha256_hex(vector.key, vector.data) == vector.hmac);
}

TEST_CASE("SHA-256 gives the value of FIPS 180-4's example") {
  // NIST, example values of FIPS 180-4 for "abc".
  CHECK(sha256_hex("abc") == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
}

TEST_CASE("a message is signed with its timestamp") {
  // printf '1700000000.{"a":1}' | openssl dgst -sha256 -hmac 'a key of sixteen or more bytes'
  CHECK(webhook_signature("a key of sixteen or more bytes", 1'700'000'000, R"({"a":1})") ==
        "sha256=e74434cea6c9d00fd111ed457de234a07fb4f6f3d7c68d938738d114ca5b2f52");
  CHECK(webhook_signature("k", 1, "23") != webhook_signature("k", 12, "3"));  // the dot keeps them apart
}
