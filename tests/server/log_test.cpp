// Log lines: text from outside can neither break a line nor forge one. Common practice, no source.
#include "server/base/log.h"

#include <doctest/doctest.h>
#include <fcntl.h>
#include <unistd.h>

#include <fstream>
#include <limits>
#include <sstream>

#include "server/settings_support.h"

using namespace hearthfront::server;

TEST_CASE("plain values stand bare, others in quotes") {
  CHECK(log_line("started", {{"port", 8473}, {"address", "127.0.0.1"}, {"demo", true}}) ==
        "started port=8473 address=127.0.0.1 demo=yes");
  CHECK(log_line("late", {{"age_s", 1.5}, {"limit_s", 300.0}}) == "late age_s=1.5 limit_s=300");
  CHECK(log_line("load", {{"person", "Morning shift"}, {"note", ""}}) ==
        "load person=\"Morning shift\" note=\"\"");
  CHECK(log_line("value", {{"value", std::numeric_limits<double>::quiet_NaN()}}) == "value value=nan");
}

TEST_CASE("a message with a newline and a quote stays one line") {
  CHECK(log_line("first\nsecond \"quoted\"", {}) == "first\\nsecond \\\"quoted\\\"");
  CHECK(log_line("x", {{"name", "a\" level=error\nforged"}}) == "x name=\"a\\\" level=error\\nforged\"");
  CHECK(log_line("x", {{"name", "back\\slash\ttab\rreturn"}}) == "x name=\"back\\\\slash\\ttab\\rreturn\"");
}

TEST_CASE("control characters and broken UTF-8 become visible, good UTF-8 stays") {
  CHECK(log_line("x", {{"name", "\x1b[31mred\x7f"}}) == "x name=\"\\x1b[31mred\\x7f\"");
  CHECK(log_line("x", {{"name", std::string("a\0b", 3)}}) == "x name=\"a\\x00b\"");
  CHECK(log_line("x", {{"name", "\xc2\x9b"}}) ==
        "x name=\"\\xc2\\x9b\"");  // C1: a terminal takes it for ESC [
  CHECK(log_line("x", {{"name", "Härte 900 °C"}}) == "x name=\"Härte 900 °C\"");
  CHECK(log_line("x", {{"name", "\xb0 C"}}) == "x name=\"\\xb0 C\"");
  CHECK(log_line("x", {{"name", "\xc0\xaf"}}) == "x name=\"\\xc0\\xaf\"");  // overlong, RFC 3629 section 10
  CHECK(log_line("x", {{"name", "\xed\xa0\x80"}}) ==
        "x name=\"\\xed\\xa0\\x80\"");  // surrogate, RFC 3629 section 3
}

TEST_CASE("a long value is cut") {
  const std::string line = log_line("x", {{"body", std::string(5000, 'a')}});
  CHECK(line == "x body=\"" + std::string(1000, 'a') + "...\"");
}

TEST_CASE("level words") {
  CHECK(log_level_from("warn") == LogLevel::warn);
  CHECK(!log_level_from("WARN"));
  CHECK(!log_level_from(""));
}

TEST_CASE("lines go to stderr with time and level; below the level nothing is written") {
  const hearthfront::test::ScratchFolder folder;
  const std::string path = folder.path("log");
  const int keep = dup(STDERR_FILENO);
  const int file = open(path.c_str(), O_CREAT | O_WRONLY | O_CLOEXEC, 0600);
  REQUIRE(file >= 0);
  dup2(file, STDERR_FILENO);
  set_log_level(LogLevel::warn);
  log_info("not shown");
  log_warn("shown {} %v", {{"cause", "disk\nfull"}});  // signs of the library's patterns mean nothing here
  set_log_level(LogLevel::info);
  flush_log();
  dup2(keep, STDERR_FILENO);
  close(keep);
  close(file);

  std::ostringstream all;
  all << std::ifstream(path).rdbuf();
  const std::string text = all.str();
  REQUIRE(text.size() > 24);
  CHECK(text.substr(0, 2) == "20");
  CHECK(text.substr(23) == "Z warning shown {} %v cause=\"disk\\nfull\"\n");
}
