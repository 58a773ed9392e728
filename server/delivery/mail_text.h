// A mail as bytes for SMTP: RFC 5322 (format), RFC 2045 and 2047 (UTF-8 in body and subject), RFC 3834 (mail
// that no machine shall answer). Pure, any thread. Whatever the texts hold, they make no header of their own.
#pragma once

#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

namespace hearthfront::server {

struct Mail {
  std::string from;  // checked addresses (is_mail_address)
  std::vector<std::string> to;
  std::string subject;      // any UTF-8; line breaks and other control characters become spaces
  std::string body;         // any UTF-8, lines end with \n
  std::string message_id;   // of message_id_of
  std::string in_reply_to;  // the same for an earlier mail, or empty
  std::int64_t at_s = 0;    // s since 1970-01-01 UTC
};

std::string mail_text(const Mail& mail);

// "<...@domain of from>", the same for the same key: a mail that comes twice is recognised by it.
std::string message_id_of(std::string_view key, std::string_view from);
// "Mon, 02 Mar 2026 06:05:00 +0000" (RFC 5322 3.3)
std::string mail_date(std::int64_t at_s);
// As it stands behind "Subject: ": plain where it can be, else in encoded words, folded.
std::string encoded_subject(std::string_view text);
// Quoted-printable with CRLF line ends.
std::string quoted_printable(std::string_view text);

}  // namespace hearthfront::server
