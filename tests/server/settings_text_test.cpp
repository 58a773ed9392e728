// Small text tools of server/base: numbers, UTF-8, likely words.
#include <doctest/doctest.h>

#include <limits>

#include "server/base/nearest.h"
#include "server/base/number_text.h"
#include "server/base/utf8.h"

using namespace hearthfront::server;

TEST_CASE("numbers are written as people write them, and read back the same") {
  // Shortest text that reads back as the same value: std::to_chars (ISO C++).
  CHECK(number_text(0) == "0");
  CHECK(number_text(-0.5) == "-0.5");
  CHECK(number_text(0.1 + 0.2) == "0.30000000000000004");
  CHECK(number_text(8'388'608) == "8388608");
  CHECK(number_text(0.0001) == "0.0001");
  CHECK(number_text(1.25e-7) == "1.25e-07");
  CHECK(number_text(1e300) == "1e+300");
  CHECK(number_text(std::numeric_limits<double>::infinity()) == "inf");
}

TEST_CASE("UTF-8 is told from other bytes") {
  // RFC 3629: section 3 (surrogates), section 4 (syntax), section 10 (overlong forms).
  CHECK(valid_utf8(""));
  CHECK(valid_utf8("°C ✓ \xf0\x9f\x94\xa5"));
  for (const char* bad : {"\xb0", "\xc3", "\xc0\xaf", "\xe0\x80\xaf", "\xed\xa0\x80", "\xf0\x80\x80\xaf",
                          "\xf4\x90\x80\x80", "\xf5\x80\x80\x80", "\xe2\x82", "a\xff"}) {
    CHECK(!valid_utf8(bad));
  }
}

TEST_CASE("text is cut between characters and repaired as Latin-1") {
  // Latin-1: ISO/IEC 8859-1, whose byte values are the first 256 code points of Unicode.
  CHECK(clean_text("900 \xb0"
                   "C") == "900 °C");
  CHECK(clean_text("H\xe4rten") == "Härten");
  CHECK(clean_text("°°°", 5) == "°°");
  CHECK(clean_text("\xb0\xb0\xb0", 5) == "°°");
  CHECK(clean_text("abc", 3) == "abc");
  CHECK(clean_text("abcd", 3) == "abc");
}

TEST_CASE("a mistyped word finds its neighbour, a strange one none") {
  const std::vector<std::string> known{"temperature", "port", "carbon_potential"};
  CHECK(nearest("temprature", known) == "temperature");
  CHECK(nearest("Temperature", known) == "temperature");
  CHECK(nearest("prot", known) == "port");
  CHECK(nearest("carbon-potential", known) == "carbon_potential");
  CHECK(nearest("host", known) == "");
  CHECK(nearest("x", known) == "");
  CHECK(nearest("", known) == "");
  CHECK(nearest(std::string(1'000'000, 'x'), known) == "");
  CHECK(suggestion("prot", known) == " (did you mean \"port\"?)");
  CHECK(suggestion("xyz", known) == "");
}
