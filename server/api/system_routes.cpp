// Health, status, metrics, the API description, the event stream and the dashboard's files.
#include "server/api/api.h"
#include "server/api/assets.h"
#include "server/base/json_fields.h"
#include "server/base/time_text.h"
#include "server/base/version.h"
#include "solver/solver.h"

namespace hearthfront::server {
namespace {

std::string not_ready_reason(ServiceState state, bool poisoned) {
  if (state == ServiceState::starting) return "Starting: open loads are being derived from their readings.";
  if (state == ServiceState::stopping) return "Stopping.";
  if (poisoned)
    return "A write to the database has an unknown fate, so no more are taken. Check the disk, then restart "
           "the daemon.";
  return "";
}

const char* state_word(ServiceState state, bool poisoned) {
  if (state == ServiceState::starting) return "starting";
  if (state == ServiceState::stopping) return "stopping";
  return poisoned ? "not ready" : "ready";
}

Response serve_file(const Request& request) {
  const std::string path = request.path == "/" ? "/index.html" : request.path;
  const Asset* asset = find_asset(path);
  if (!asset)
    throw Problem{
        404, "unknown-path", "There is nothing at this address",
        "No route or file is called " + request.path + ". The API is described at /api/v1/openapi.yaml.", ""};
  // The bundler puts a hash of the content into the name of every file but the page itself.
  const bool hashed = path != "/index.html" && path != "/openapi.yaml";
  return {200,
          content_type_of(path),
          std::string(asset->body),
          {{"Cache-Control", hashed ? "public, max-age=31536000, immutable" : "no-cache"}}};
}

}  // namespace

Response Api::status(const Request&) const {
  const ServiceState state = parts_.state;
  const bool poisoned = parts_.store.counters().poisoned;
  const std::string reason = not_ready_reason(state, poisoned);
  const Json json{{"version", version},
                  {"model_version", solver::model_version},
                  {"kernel", solver::kernel_name()},
                  {"now", format_time(parts_.clock.now_us())},
                  {"demo", parts_.plant.demo},
                  {"clock_speed", parts_.clock.speed()},
                  {"plant", parts_.plant.name},
                  {"plant_note", parts_.plant.note},
                  {"state", state_word(state, poisoned)},
                  {"reason", reason.empty() ? Json(nullptr) : Json(reason)}};
  return {200, "application/json", dumped(json), {}};
}

Response Api::ready(const Request&) const {
  const ServiceState state = parts_.state;
  const bool poisoned = parts_.store.counters().poisoned;
  if (state == ServiceState::ready && !poisoned) return {200, "text/plain; charset=utf-8", "ready\n", {}};
  Response response =
      problem_response({503, "not-ready", "The daemon is not ready", not_ready_reason(state, poisoned), ""});
  response.headers.emplace_back("Retry-After", "2");
  return response;
}

void Api::update_metrics() const {
  const storage::StoreCounters store = parts_.store.counters();
  Metrics& m = parts_.metrics;
  m.raise_to(Total::readings_stored, static_cast<double>(store.readings_stored));
  m.raise_to(Total::readings_duplicate, static_cast<double>(store.readings_duplicate));
  m.raise_to(Total::readings_conflict, static_cast<double>(store.readings_conflict));
  m.raise_to(Total::commits, static_cast<double>(store.commits));
  m.set(Level::queued_readings, static_cast<double>(store.queued_readings));
  m.set(Level::wal_bytes, static_cast<double>(store.wal_bytes));
  m.set(Level::store_refuses_writes, store.poisoned ? 1 : 0);
  const HttpCounters http = parts_.http.counters();
  m.raise_to(Total::http_requests, static_cast<double>(http.requests));
  m.raise_to(Total::http_refused_connections, static_cast<double>(http.refused_connections));
  m.raise_to(Total::http_dropped_streams, static_cast<double>(http.dropped_streams));
  m.set(Level::http_open_connections, http.open_connections);
  m.set(Level::http_open_streams, http.open_streams);
  m.set(Level::clock_speed, parts_.clock.speed());
  const std::int64_t now = parts_.clock.now_us();
  for (const Furnace& furnace : parts_.plant.furnaces)
    if (const auto newest = parts_.board.newest_reading(furnace.id))
      m.set_data_age(furnace.id, static_cast<double>(now - *newest) * 1e-6);
}

void Api::add_system_routes() {
  HttpServer& http = parts_.http;
  // Both without a worker: whoever watches the daemon must hear of it while all workers wait for the disk.
  http.route_at_once("/healthz", [](const Request&) {
    return Response{200, "text/plain; charset=utf-8", "alive\n", {}};
  });
  http.route_at_once("/readyz", [this](const Request& r) { return ready(r); });
  http.route("GET", "/metrics", [this](const Request&) {
    update_metrics();
    return Response{200, "text/plain; version=0.0.4; charset=utf-8", parts_.metrics.text(), {}};
  });
  http.route("GET", "/api/v1/status", [this](const Request& r) { return status(r); });
  http.route("GET", "/api/v1/openapi.yaml", [](const Request&) {
    return Response{200, "application/yaml", std::string(find_asset("/openapi.yaml")->body), {}};
  });
  http.stream("/api/v1/events", [this](const Request&) {
    return "id: " + std::to_string(parts_.board.sequence()) + "\nevent: floor\ndata: " + floor() + "\n\n";
  });
  http.fallback(serve_file);
}

}  // namespace hearthfront::server
