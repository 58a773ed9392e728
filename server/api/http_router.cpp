#include "server/api/http_router.h"

#include <stdexcept>

#include "server/api/http_text.h"

namespace hearthfront::server {
namespace {

// Takes the first segment off "/a/b": returns "a" and leaves "/b".
std::string_view take_segment(std::string_view& rest) {
  rest.remove_prefix(1);
  const auto segment = rest.substr(0, rest.find('/'));
  rest.remove_prefix(segment.size());
  return segment;
}

}  // namespace

void Router::add(std::string method, std::string pattern, Endpoint endpoint) {
  const auto wrong = [&](const char* why) {
    return std::logic_error("route " + method + " " + pattern + ": " + why);
  };
  if (!is_token(method)) throw wrong("the method is not a word");
  if (!endpoint.handler && !endpoint.greeting) throw wrong("there is no handler");
  if (pattern.empty() || pattern.front() != '/') throw wrong("a pattern begins with a slash");
  Node* node = &root_;
  for (std::string_view rest = pattern; !rest.empty();) {
    const auto segment = take_segment(rest);
    if (segment != "{}" && segment.find_first_of("{}") != std::string_view::npos) {
      throw wrong("{} stands for a whole segment");
    }
    auto& next = segment == "{}" ? node->any : node->literals[std::string(segment)];
    if (!next) next = std::make_unique<Node>();
    node = next.get();
  }
  if (!node->endpoints.emplace(method, std::move(endpoint)).second) throw wrong("it exists already");
  routes_.emplace_back(std::move(method), std::move(pattern));
}

const Router::Node* Router::descend(const Node& node, std::string_view rest,
                                    std::vector<std::string>& parameters) {
  if (rest.empty()) return node.endpoints.empty() ? nullptr : &node;
  const auto segment = take_segment(rest);
  if (const auto literal = node.literals.find(segment); literal != node.literals.end()) {
    if (const Node* found = descend(*literal->second, rest, parameters)) return found;
  }
  if (!node.any || segment.empty()) return nullptr;
  parameters.emplace_back(segment);
  if (const Node* found = descend(*node.any, rest, parameters)) return found;
  parameters.pop_back();
  return nullptr;
}

Router::Match Router::find(std::string_view method, std::string_view path) const {
  Match match;
  if (path.empty() || path.front() != '/') return match;
  const Node* node = descend(root_, path, match.parameters);
  if (node == nullptr) return match;
  for (const auto& [name, endpoint] : node->endpoints) {
    match.allowed_methods +=
        (match.allowed_methods.empty() ? "" : ", ") + name + (name == "GET" ? ", HEAD" : "");
  }
  const auto found = node->endpoints.find(method == "HEAD" ? std::string_view("GET") : method);
  if (found != node->endpoints.end()) match.endpoint = &found->second;
  return match;
}

}  // namespace hearthfront::server
