// Mail as bytes, read back by the rules of RFC 5322, 2045 and 2047 with a reader of our own.
#include <doctest/doctest.h>

#include <algorithm>
#include <map>
#include <string>
#include <vector>

#include "server/base/utf8.h"
#include "server/delivery/alert_mail.h"
#include "server/delivery/mail_text.h"

using namespace hearthfront::server;

namespace {

struct Parsed {
  std::vector<std::pair<std::string, std::string>> headers;  // unfolded
  std::string body;                                          // still encoded
  std::string header(const std::string& name) const {
    for (const auto& [key, value] : headers)
      if (key == name) return value;
    return "(none)";
  }
};

// RFC 5322 2.1 and 2.2: lines end with CRLF and nothing else, at most 998 characters; an empty one ends the
// headers.
Parsed parsed(const std::string& text) {
  Parsed mail;
  std::size_t from = 0;
  while (from < text.size()) {
    const std::size_t end = text.find("\r\n", from);
    REQUIRE(end != std::string::npos);
    const std::string line = text.substr(from, end - from);
    CHECK(line.find_first_of(std::string("\r\n\0", 3)) == std::string::npos);
    CHECK(line.size() <= 998);
    from = end + 2;
    if (line.empty()) break;
    if (line[0] == ' ') {
      REQUIRE_FALSE(mail.headers.empty());
      mail.headers.back().second += line;
      continue;
    }
    const std::size_t colon = line.find(": ");
    REQUIRE(colon != std::string::npos);
    CHECK(std::all_of(line.begin(), line.end(), [](char c) { return c >= 0x20 && c < 0x7f; }));
    mail.headers.emplace_back(line.substr(0, colon), line.substr(colon + 2));
  }
  mail.body = text.substr(from);
  return mail;
}

// RFC 2045 6.7
std::string from_quoted_printable(const std::string& text) {
  std::string out;
  for (std::size_t i = 0; i < text.size(); ++i) {
    if (text[i] != '=') {
      if (text[i] != '\r') out += text[i];
      continue;
    }
    if (text.compare(i, 3, "=\r\n") != 0)
      out += static_cast<char>(std::stoi(text.substr(i + 1, 2), nullptr, 16));
    i += 2;
  }
  return out;
}

std::string from_base64(const std::string& text) {
  const std::string digits = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
  std::string out;
  unsigned bits = 0, held = 0;
  for (const char c : text) {
    if (c == '=') break;
    bits = bits << 6 | static_cast<unsigned>(digits.find(c));
    held += 6;
    if (held < 8) continue;
    held -= 8;
    out += static_cast<char>(bits >> held & 255);
  }
  return out;
}

// RFC 2047 2 and 6.2: white space between encoded words is none of the text; each is at most 75 long and
// holds whole characters.
std::string from_encoded_words(const std::string& text) {
  const std::string start = "=?UTF-8?B?";
  if (!text.starts_with(start)) return text;
  std::string out;
  for (std::size_t at = 0; at < text.size();) {
    REQUIRE(text.compare(at, start.size(), start) == 0);
    const std::size_t end = text.find("?=", at + start.size());
    REQUIRE(end != std::string::npos);
    CHECK(end + 2 - at <= 75);
    const std::string part = from_base64(text.substr(at + start.size(), end - at - start.size()));
    CHECK(valid_utf8(part));
    out += part;
    at = text.find_first_not_of(' ', end + 2);
  }
  return out;
}

Mail small_mail() {
  return {"furnaces@shop.example", {"shift@shop.example"}, "Note", "Body\n", "<k@shop.example>", "", 0};
}

}  // namespace

TEST_CASE("a mail has the headers that RFC 5322 asks for, and says that a machine wrote it") {
  Mail mail = small_mail();
  mail.to.push_back("lead@shop.example");
  mail.in_reply_to = "<first@shop.example>";
  const Parsed read = parsed(mail_text(mail));
  CHECK(read.header("From") == "hearthfront <furnaces@shop.example>");
  CHECK(read.header("To") == "shift@shop.example, lead@shop.example");
  CHECK(read.header("Date") == "Thu, 01 Jan 1970 00:00:00 +0000");
  CHECK(read.header("Message-ID") == "<k@shop.example>");
  CHECK(read.header("In-Reply-To") == "<first@shop.example>");
  CHECK(read.header("References") == "<first@shop.example>");
  CHECK(read.header("Auto-Submitted") == "auto-generated");  // RFC 3834 5
  CHECK(read.header("MIME-Version") == "1.0");
  CHECK(from_quoted_printable(read.body) == "Body\n");
  CHECK(parsed(mail_text(small_mail())).header("In-Reply-To") == "(none)");
}

TEST_CASE("dates are written as in RFC 5322") {
  // RFC 5322 A.1.1: "Fri, 21 Nov 1997 09:55:06 -0600", in UTC.
  CHECK(mail_date(880'127'706) == "Fri, 21 Nov 1997 15:55:06 +0000");
  CHECK(mail_date(1'709'164'800) == "Thu, 29 Feb 2024 00:00:00 +0000");  // date -u -d @1709164800
}

TEST_CASE("no text makes a header or ends the headers") {
  const std::string attempts[] = {
      "Fine\r\nBcc: everybody@shop.example",
      "Fine\nBcc: everybody@shop.example",
      "Fine\rBcc: everybody@shop.example",
      "Fine\r\n\r\nNot the body",
      "Fine\r\n.\r\nMAIL FROM:<x@shop.example>",
      "=?UTF-8?Q?Fine=0D=0ABcc:_everybody@shop.example?=",
      std::string("Fine\0Bcc: everybody@shop.example", 32),
      "Fine\xe2\x80\xa8"
      "Bcc: everybody@shop.example",  // U+2028, a line separator
      std::string(5000, 'x') + "\r\nBcc: everybody@shop.example",
  };
  for (const std::string& attempt : attempts) {
    CAPTURE(attempt);
    Mail mail = small_mail();
    const Parsed plain = parsed(mail_text(mail));
    mail.subject = attempt;
    mail.body = attempt + "\n";
    const Parsed read = parsed(mail_text(mail));
    std::vector<std::string> names, expected;
    for (const auto& each : read.headers) names.push_back(each.first);
    for (const auto& each : plain.headers) expected.push_back(each.first);
    CHECK(names == expected);
    CHECK(from_encoded_words(read.header("Subject")).starts_with(attempt.substr(0, 4)));
    CHECK(from_encoded_words(read.header("Subject")).find_first_of("\r\n") == std::string::npos);
    CHECK(from_quoted_printable(read.body).starts_with(attempt.substr(0, 4)));
  }
}

TEST_CASE("a subject comes back as it was, in lines of at most 76") {
  const std::string subjects[] = {
      "Urgent: Pit 2: too shallow",
      "Urgent: Härteofen 2, load 2291: 0.3 mm at 930 °C, µm and ✓ and 炉 and 🔥 and so on until it is long "
      "enough",
      "Warning: a plain one that is far longer than what fits into a single line of a header, and so is "
      "folded",
      "",
  };
  for (const std::string& subject : subjects) {
    Mail mail = small_mail();
    mail.subject = subject;
    const std::string text = mail_text(mail);
    CHECK(from_encoded_words(parsed(text).header("Subject")) == subject);
    const std::size_t start = text.find("Subject: ");
    const std::string header = text.substr(start, text.find("\r\nMessage-ID", start) - start);
    for (std::size_t at = 0; at < header.size();) {
      const std::size_t end = std::min(header.find("\r\n", at), header.size());
      CHECK(end - at <= 76);  // RFC 2047 2
      at = end + 2;
    }
  }
}

TEST_CASE("a body comes back as it was, in lines of at most 76") {
  const std::string bodies[] = {
      "Plain.\n",
      "Ends with blanks  \nand a tab\t\n",
      "a = b, 930 °C\n",
      "No line end",
      ".\n..\n.dot\n",
      "\n\n",
      std::string(500, 'x') + "\n" + std::string(200, '=') + "\n",
  };
  for (const std::string& body : bodies) {
    const std::string encoded = quoted_printable(body);
    CHECK(from_quoted_printable(encoded) == (body.ends_with('\n') ? body : body + "\n"));
    for (std::size_t at = 0; at < encoded.size();) {
      const std::size_t end = encoded.find("\r\n", at);
      REQUIRE(end != std::string::npos);
      CHECK(end - at <= 76);  // RFC 2045 6.7 (5)
      // RFC 2045 6.7 (3): no white space at the end of a line
      CHECK((end == at || (encoded[end - 1] != ' ' && encoded[end - 1] != '\t')));
      at = end + 2;
    }
  }
}

TEST_CASE("the same message has the same identity, another one another") {
  const std::string from = "furnaces@shop.example";
  CHECK(message_id_of("alert-7-raised-1", from) == "<alert-7-raised-1@shop.example>");
  const std::string strange = message_id_of("a> <b\r\nBcc: x", from);
  CHECK(strange == message_id_of("a> <b\r\nBcc: x", from));
  CHECK(strange != message_id_of("a> <b\r\nBcc: y", from));
  CHECK(strange.size() == 1 + 64 + from.size() - 8 + 1);  // a digest, and the domain with its @
  CHECK(strange.find_first_of(" \r\n") == std::string::npos);
}

TEST_CASE("an alert reads as sentences: what, where, since when, what to do") {
  const AlertMail mail =
      alert_mail(R"({"event":"raised","key":"k","plant":"P","at":"2026-03-02T06:05:00Z","alert":{
    "id":7,"kind":"projected miss","severity":"urgent","furnace":"pit-2","furnace_name":"Pit 2","load_name":"2291",
    "item":"A","sentence":"Item A will be too shallow.","advice":"Hold boost 25 min longer.",
    "since":"2026-03-02T06:00:00Z","cleared_at":null}})");
  CHECK(mail.subject == "Urgent: Pit 2, load 2291, item A: Item A will be too shallow.");
  CHECK(mail.body.starts_with(
      "Item A will be too shallow.\n\nWhere: Pit 2, load 2291, item A\n"
      "Since: 2026-03-02T06:00:00Z\nWhat to do: Hold boost 25 min longer.\n\nAdvice only:"));
  const AlertMail over = alert_mail(
      R"({"event":"cleared","alert":{"severity":"urgent","furnace_name":"Pit 2","sentence":"No reading.","advice":"Look."}})");
  CHECK(over.subject == "Over: Pit 2: No reading.");
  CHECK(over.body.find("What to do") == std::string::npos);
  CHECK(alert_mail(R"({"event":"escalated","alert":{"severity":"warning","sentence":"S."}})").subject ==
        "Warning, acknowledged by nobody: S.");
  CHECK(alert_mail(R"({"event":"test","alert":null,"sentence":"A test."})").subject == "Test: A test.");
  CHECK(alert_mail("no JSON").body.starts_with("no JSON\n"));
}
