// Furnaces with their channels, readings of one channel, and the steel library.
#include <limits>

#include "server/api/api.h"
#include "server/api/documents.h"
#include "server/api/route_guard.h"
#include "server/base/time_text.h"
#include "server/live/stored_health.h"

namespace hearthfront::server {
namespace {

std::optional<std::int64_t> time_from(const Request& request, const char* name) {
  const auto it = request.query.find(name);
  if (it == request.query.end()) return std::nullopt;
  std::string reason;
  const auto time = parse_time(it->second, reason);
  if (!time)
    throw Problem{422, "invalid-request", "The time cannot be used", std::string(name) + ": " + reason, name};
  return time;
}

}  // namespace

void Api::add_furnace_routes() {
  HttpServer& http = parts_.http;
  http.route("GET", "/api/v1/furnaces", guarded([this](const Request& r) { return furnaces(r); }));
  http.route("GET", "/api/v1/furnaces/{}", guarded([this](const Request& r) { return furnace(r); }));
  http.route("GET", "/api/v1/furnaces/{}/readings",
             guarded([this](const Request& r) { return readings(r); }));
  http.route("GET", "/api/v1/steels", [this](const Request&) {
    return Response{200, "application/json", steels_json(parts_.plant), {}};
  });
}

Response Api::furnaces(const Request&) {
  std::vector<FurnaceState> states;
  for (const Furnace& f : parts_.plant.furnaces) states.push_back(state_of(f));
  return {200, "application/json", furnaces_json(states, parts_.clock.now_us()), {}};
}

Response Api::furnace(const Request& request) {
  return {200, "application/json", furnace_json(state_of(find_furnace(request)), parts_.clock.now_us()), {}};
}

ChannelHealth Api::health_of(const Furnace& furnace, const Channel& channel, storage::Reader& reader) const {
  const auto id = [this](const std::string& furnace_id, const std::string& name) {
    return parts_.acceptor.channel_id(furnace_id, name).value();
  };
  return stored_health(furnace, channel, id, reader, parts_.clock.now_us());
}

FurnaceState Api::state_of(const Furnace& furnace) {
  FurnaceState state{&furnace, {}, {}};
  auto reader = readers_.take();
  for (const Channel& channel : furnace.channels)
    state.channels.push_back({&channel,
                              reader->counts(parts_.acceptor.channel_id(furnace.id, channel.name).value()),
                              health_of(furnace, channel, *reader)});
  for (const auto& view : parts_.board.loads())
    if (view->row.furnace == furnace.id) state.open_loads.push_back(view->row.id);
  return state;
}

Response Api::readings(const Request& request) {
  const Furnace& f = find_furnace(request);
  const auto named = request.query.find("channel");
  const Channel* channel = named == request.query.end() ? nullptr : f.channel(named->second);
  if (!channel)
    throw Problem{422, "unknown-channel", "Which channel?",
                  "channel: name one of the channels listed at /api/v1/furnaces/" + f.id + ".", "channel"};
  constexpr std::int64_t longest_us = 400LL * 86'400'000'000;
  constexpr std::int64_t usual_us = 86'400'000'000;
  const std::int64_t to = time_from(request, "to").value_or(parts_.clock.now_us());
  const std::int64_t from = time_from(request, "from").value_or(to - usual_us);
  if (from > to || to - from > longest_us)
    throw Problem{422, "invalid-request", "The stretch of time cannot be used",
                  "from must be before to, by 400 days at most.", "from"};
  auto reader = readers_.take();
  const auto rows = reader->accepted(parts_.acceptor.channel_id(f.id, channel->name).value(), from, to);
  return {200, "application/json", readings_json(channel->name, channel->unit, rows, 2000), {}};
}

}  // namespace hearthfront::server
