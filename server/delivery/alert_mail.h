// An alert as a person reads it in a mail: what, where, since when, what to do. Pure, any thread.
#pragma once

#include <string>

namespace hearthfront::server {

struct AlertMail {
  std::string subject, body;  // UTF-8, not yet encoded
};

// `payload_json` as in OutboxRow. What it lacks is left out; a payload that is no JSON object is quoted
// whole.
AlertMail alert_mail(const std::string& payload_json);

}  // namespace hearthfront::server
