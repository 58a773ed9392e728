// Host names to addresses without the risk of hanging. Any thread.
#pragma once

#include <chrono>
#include <stop_token>
#include <string>

namespace hearthfront::server {

// Empty where the name has an address, else why not. Gives up at `until` or soon after a stop request, even
// where the resolver hangs: a library that resolves by itself is called only after this succeeded.
std::string unresolvable(const std::string& host, std::chrono::steady_clock::time_point until,
                         const std::stop_token& stop);

}  // namespace hearthfront::server
