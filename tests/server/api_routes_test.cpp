// Every route is described in openapi.yaml and everything described there is a route.
#include <doctest/doctest.h>
#include <unistd.h>

#include <atomic>
#include <filesystem>
#include <fstream>
#include <set>
#include <string>

#include "live_support.h"
#include "server/api/api.h"

using namespace hearthfront::server;
namespace storage = hearthfront::storage;

namespace {

using Routes = std::set<std::string>;  // "GET /api/v1/loads/{}"

std::string with_plain_places(std::string path) {
  for (auto open = path.find('{'); open != std::string::npos; open = path.find('{', open + 1))
    path.erase(open + 1, path.find('}', open) - open - 1);
  return path;
}

Routes described() {
  Routes routes;
  std::ifstream in(std::string(HF_SOURCE_DIR) + "/server/api/openapi.yaml");
  std::string path;
  for (std::string line; std::getline(in, line);) {
    if (line == "components:") break;
    if (line.starts_with("  /") && line.ends_with(":"))
      path = with_plain_places(line.substr(2, line.size() - 3));
    if (line == "    get:") routes.insert("GET " + path);
    if (line == "    post:") routes.insert("POST " + path);
    if (line == "    put:") routes.insert("PUT " + path);
  }
  return routes;
}

}  // namespace

TEST_CASE("the API description and the routes are the same list") {
  const auto folder = std::filesystem::temp_directory_path() / ("hf-routes-" + std::to_string(getpid()));
  std::filesystem::create_directories(folder);
  {
    const Settings settings;
    const Plant plant = test::small_plant();
    const SystemClock clock;
    storage::StoreOptions options;
    options.path = folder / "test.db";
    storage::Store store(options);
    const Board board;
    const Acceptor acceptor(plant, clock, store, settings.ingest);
    Metrics metrics;
    HttpServer http{HttpLimits{}};
    const std::atomic<ServiceState> state{ServiceState::ready};
    Dispatcher dispatcher(settings.targets, store, clock, [] {});
    AlertKeeper alerts({settings, plant, clock, store, board, {}, {}, [] { return false; }, {}});
    Api api(
        {settings, plant, clock, store, board, acceptor, metrics, http, dispatcher, state, [] {}, alerts});
    api.add_routes();

    Routes served;
    for (const auto& [method, pattern] : http.routes()) served.insert(method + " " + pattern);
    CHECK(served == described());
    CHECK(served.size() >= 20);
  }
  std::filesystem::remove_all(folder);
}
