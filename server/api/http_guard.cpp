#include "server/api/http_guard.h"

#include <arpa/inet.h>
#include <netinet/in.h>

#include <algorithm>

#include "server/api/http_text.h"

namespace hearthfront::server {
namespace {

bool is_loopback(const std::string& host) {
  in_addr v4{};
  in6_addr v6{};
  if (inet_pton(AF_INET, host.c_str(), &v4) == 1) return (ntohl(v4.s_addr) >> 24) == 127;
  return inet_pton(AF_INET6, host.c_str(), &v6) == 1 && IN6_IS_ADDR_LOOPBACK(&v6);
}

bool changes_state(const std::string& method) {
  return method != "GET" && method != "HEAD" && method != "OPTIONS";
}

}  // namespace

std::string host_of(std::string_view authority) {
  const bool bracketed = !authority.empty() && authority.front() == '[';
  const auto end = bracketed ? authority.find(']') : authority.find(':');
  if (bracketed && end == std::string_view::npos) return {};
  auto host = bracketed ? authority.substr(1, end - 1) : authority.substr(0, end);
  const auto rest =
      end == std::string_view::npos ? std::string_view{} : authority.substr(end + (bracketed ? 1 : 0));
  const bool port_fits = rest.empty() || (rest.front() == ':' && rest.size() <= 6 &&
                                          rest.find_first_not_of("0123456789", 1) == std::string_view::npos);
  if (!port_fits) return {};
  if (!bracketed && !host.empty() && host.back() == '.') host.remove_suffix(1);
  return lower_ascii(host);
}

HostGuard::HostGuard(const std::vector<std::string>& host_names) {
  for (const auto& name : host_names) host_names_.push_back(lower_ascii(name));
}

bool HostGuard::knows(std::string_view host, std::string_view local_address) const {
  if (host.empty()) return false;
  if (host == "localhost" || host == local_address || is_loopback(std::string(host))) return true;
  return std::find(host_names_.begin(), host_names_.end(), host) != host_names_.end();
}

void HostGuard::check(const RequestHead& head, std::string_view local_address) const {
  const auto authority = head.header("host");
  // Only HTTP/1.0 comes here without Host, and no browser speaks that.
  if (head.headers.count("host") != 0 && !knows(host_of(authority), local_address)) {
    throw Problem{421,
                  "unknown-host",
                  "This server is not known under that name",
                  "Use the server's address, localhost, or a name listed in the server's settings.",
                  {}};
  }
  if (!changes_state(head.method)) return;
  // A page of our own says same-origin, a person's own address line none; same-site is another port or a
  // neighbour's name. Gateways and old browsers send nothing.
  const auto site = head.header("sec-fetch-site");
  bool foreign = !site.empty() && site != "same-origin" && site != "none";
  if (const auto found = head.headers.find("origin"); found != head.headers.end()) {
    const std::string_view origin = found->second;
    const auto scheme_end = origin.find("://");
    const auto from =
        scheme_end == std::string_view::npos ? std::string_view{} : origin.substr(scheme_end + 3);
    const auto listed = std::find(host_names_.begin(), host_names_.end(), host_of(from));
    // Behind a proxy Host may be rewritten, so a configured name is home as well.
    foreign = foreign || from.empty() ||
              (lower_ascii(from) != lower_ascii(authority) && listed == host_names_.end());
  }
  if (foreign) {
    throw Problem{403,
                  "foreign-origin",
                  "Changes are accepted from this server's own pages only",
                  "The request came from a page of another site.",
                  {}};
  }
}

}  // namespace hearthfront::server
