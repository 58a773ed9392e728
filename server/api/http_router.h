// Exact matching of method and path by whole segments; {} takes one segment. Built before the server
// starts, then read by all workers without locks. Failure while building is std::logic_error.
#pragma once

#include <functional>
#include <map>
#include <memory>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "server/api/http_server.h"

namespace hearthfront::server {

// What a route leads to: a handler, or a stream with the maker of its greeting.
struct Endpoint {
  HttpServer::Handler handler;
  std::function<std::string(const Request&)> greeting;
};

class Router {
 public:
  void add(std::string method, std::string pattern, Endpoint endpoint);

  struct Match {
    const Endpoint* endpoint = nullptr;  // null: no such path, or path known but not with this method
    std::string allowed_methods;         // "GET, HEAD, POST"; empty: no such path
    std::vector<std::string> parameters;
  };
  // `path` is decoded. A HEAD request takes the GET route.
  Match find(std::string_view method, std::string_view path) const;

  std::vector<std::pair<std::string, std::string>> routes() const { return routes_; }

 private:
  struct Node {
    std::map<std::string, std::unique_ptr<Node>, std::less<>> literals;
    std::unique_ptr<Node> any;
    std::map<std::string, Endpoint, std::less<>> endpoints;  // by method
  };
  static const Node* descend(const Node& node, std::string_view rest, std::vector<std::string>& parameters);

  Node root_;
  std::vector<std::pair<std::string, std::string>> routes_;
};

}  // namespace hearthfront::server
