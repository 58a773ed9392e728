// What a receiver's HTTP status means for a message. Pure.
#pragma once

#include "server/delivery/sender.h"

namespace hearthfront::server {

// 2xx: taken. 408, 425, 429 and 5xx: the receiver may take it later (RFC 9110 15, RFC 6585 4, RFC 8470 5.2).
// Anything else does not change by itself; redirects among it, since a signed message goes only where the
// settings say.
SendOutcome outcome_of_status(long status);

}  // namespace hearthfront::server
