// What the dashboard watches: floor, snapshot, result, history. Answers carry an ETag, so that a page that
// already has the newest snapshot is told so in a few bytes.
#include "server/api/api.h"
#include "server/api/documents.h"
#include "server/api/route_guard.h"
#include "server/live/derive.h"
#include "server/live/engine.h"
#include "server/live/push_line.h"
#include "server/live/result_json.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t past_views_kept = 16;

std::string view_tag(const LoadView& view) {
  return std::to_string(view.row.revision) + "-" + std::to_string(view.sequence);
}

Response with_etag(const Request& request, const std::string& etag, const std::string& body) {
  const auto known = request.headers.find("if-none-match");
  const bool same = known != request.headers.end() && known->second == etag;
  return {same ? 304 : 200,
          "application/json",
          same ? std::string() : body,
          {{"ETag", etag}, {"Cache-Control", "no-cache"}}};
}

}  // namespace

void Api::add_view_routes() {
  HttpServer& http = parts_.http;
  http.route("GET", "/api/v1/floor", [this](const Request&) {
    return Response{200, "application/json", floor(), {}};
  });
  http.route("GET", "/api/v1/loads/{}/snapshot", guarded([this](const Request& r) { return snapshot(r); }));
  http.route("GET", "/api/v1/loads/{}/result", guarded([this](const Request& r) { return result(r); }));
  http.route("GET", "/api/v1/loads/{}/history", guarded([this](const Request& r) { return history(r); }));
}

std::shared_ptr<LoadView> Api::derive_view(const FoundLoad& found, storage::Reader& reader) {
  const auto source = stored_readings(reader, [&](const std::string& furnace, const std::string& channel) {
    return parts_.acceptor.channel_id(furnace, channel).value_or(-1);
  });
  const std::int64_t now = parts_.clock.now_us();
  // An open one is soon on the board with all its bands; here nobody waits for them, or for an outlook.
  const auto load = derive(found.definition, source, found.row.ended_us.value_or(now),
                           found.row.ended_us ? Members::with : Members::without);
  auto view =
      std::make_shared<LoadView>(make_view(*load, found.definition, now, parts_.settings.live.stale_after_s));
  view->outlook_missing = outlook_start(*load, found.definition).missing;
  view->row = found.row;
  if (!found.row.ended_us) view->line_position = line_position(*found.definition, reader, now);
  view->sequence = parts_.board.sequence();
  return view;
}

std::shared_ptr<const LoadView> Api::view_of(const FoundLoad& found) {
  auto reader = readers_.take();
  if (!found.row.ended_us) {
    auto view = parts_.board.load(found.row.id);
    // A load of this very second is not on the board yet; its run is short, so it is worked out here.
    return view && view->row.revision == found.row.revision ? view : derive_view(found, *reader);
  }
  // A late reading changes a past result without a new revision of the load, and a correction is a new
  // revision before it has its result: both are part of the key.
  const auto stored = reader->result(found.row.id);
  const std::int64_t computed_us = stored ? stored->computed_us : 0;
  const auto key = std::make_tuple(found.row.id, found.row.revision, computed_us);
  {
    const std::scoped_lock lock(past_mutex_);
    if (const auto it = past_views_.find(key); it != past_views_.end()) return it->second;
  }
  auto view = derive_view(found, *reader);
  view->sequence = static_cast<std::uint64_t>(computed_us);
  const std::scoped_lock lock(past_mutex_);
  if (past_views_.size() >= past_views_kept) past_views_.erase(past_views_.begin());
  past_views_[key] = view;
  return view;
}

Response Api::snapshot(const Request& request) {
  const FoundLoad found = find_load(request);
  const auto view = view_of(found);
  auto reader = readers_.take();
  const auto notes = reader->notes(found.row.id);
  const auto alerts = parts_.alerts.list();
  const std::string etag = "\"" + view_tag(*view) + "-" + std::to_string(notes.size()) + "-" +
                           std::to_string(alerts->sequence) + "\"";
  return with_etag(request, etag, snapshot_json(*view, notes, *alerts));
}

Response Api::result(const Request& request) {
  const FoundLoad found = find_load(request);
  if (found.row.cancelled)
    throw Problem{409, "load-cancelled", "The load was cancelled",
                  "Load " + found.row.name + " was never treated, so it has no result.", ""};
  if (!found.row.ended_us) return {200, "application/json", result_json(view_of(found)->result), {}};
  auto reader = readers_.take();
  return {200, "application/json", final_result(found, *reader), {}};
}

std::string Api::final_result(const FoundLoad& found, storage::Reader& reader) {
  const auto stored = reader.result(found.row.id);
  // Just ended or corrected: the engine stores the same document in a moment.
  if (!stored || stored->revision != found.row.revision)
    return result_json(derive_view(found, reader)->result);
  return stored->result_json;
}

Response Api::history(const Request& request) {
  const FoundLoad found = find_load(request);
  const auto view = view_of(found);
  return with_etag(request, "\"" + view_tag(*view) + "\"", history_json(*view));
}

}  // namespace hearthfront::server
