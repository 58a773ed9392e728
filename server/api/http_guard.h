// Keeps foreign web pages out: a page on another site may neither reach the server under a name of its own
// (DNS rebinding) nor send it a change from a visitor's browser. Immutable, any thread. Failure is a thrown
// Problem: 421 for an unknown Host, 403 for a foreign Origin.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "server/api/http_head.h"

namespace hearthfront::server {

class HostGuard {
 public:
  explicit HostGuard(const std::vector<std::string>& host_names);

  // `local_address` is the literal the connection came in on.
  void check(const RequestHead& head, std::string_view local_address) const;

 private:
  bool knows(std::string_view host, std::string_view local_address) const;

  std::vector<std::string> host_names_;  // lower case
};

// The host of "name", "name:port", "[v6]" or "[v6]:port", lower case, without brackets or a last dot; empty
// where the authority is malformed.
std::string host_of(std::string_view authority);

}  // namespace hearthfront::server
