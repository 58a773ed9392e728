// Loads: create, list, show, note, end. Every change names a person and is audited in its transaction.
#include "server/api/api.h"
#include "server/api/documents.h"
#include "server/api/paging.h"
#include "server/api/route_guard.h"
#include "server/base/json_fields.h"
#include "server/base/time_text.h"
#include "server/live/definition_json.h"
#include "server/live/push_line.h"

namespace hearthfront::server {
namespace {}  // namespace

void Api::add_load_routes() {
  HttpServer& http = parts_.http;
  http.route("POST", "/api/v1/loads", guarded([this](const Request& r) { return create_load(r); }));
  http.route("GET", "/api/v1/loads", guarded([this](const Request& r) { return list_loads(r); }));
  http.route("GET", "/api/v1/loads/{}", guarded([this](const Request& r) { return show_load(r); }));
  http.route("POST", "/api/v1/loads/{}/notes", guarded([this](const Request& r) { return add_note(r); }));
  http.route("POST", "/api/v1/loads/{}/end", guarded([this](const Request& r) { return end_load(r); }));
  http.route("PUT", "/api/v1/loads/{}", guarded([this](const Request& r) { return correct_load(r); }));
  http.route("POST", "/api/v1/loads/{}/move", guarded([this](const Request& r) { return move_load(r); }));
  http.route("POST", "/api/v1/loads/{}/cancel", guarded([this](const Request& r) { return cancel_load(r); }));
  http.route("GET", "/api/v1/loads/{}/revisions", guarded([this](const Request& r) { return revisions(r); }));
  http.route("GET", "/api/v1/furnaces/{}/recent",
             guarded([this](const Request& r) { return recent_loads(r); }));
  http.route("POST", "/api/v1/furnaces/{}/push", guarded([this](const Request& r) { return push(r); }));
}

void Api::check_times(const LoadDefinition& load) const {
  const std::int64_t now = parts_.clock.now_us();
  const auto tolerance_us = static_cast<std::int64_t>(parts_.settings.ingest.future_tolerance_s * 1e6);
  const auto past_us = static_cast<std::int64_t>(parts_.settings.ingest.past_limit_days * 86400e6);
  if (load.started_us > now + tolerance_us || load.started_us < now - past_us)
    throw Problem{422, "invalid-load", "The start cannot be right",
                  "started_at: " + format_time(load.started_us) + " is " +
                      (load.started_us > now ? "in the future" : "too long ago") + "; it is " +
                      format_time(now) + " now.",
                  "started_at"};
  if (load.ended_us && *load.ended_us > now + tolerance_us)
    throw Problem{422, "invalid-load", "The end cannot be right", "ended_at: lies in the future.",
                  "ended_at"};
  if (load.last_place().from_us > now + tolerance_us)
    throw Problem{422, "invalid-load", "The move cannot be right",
                  "path: the last step lies in the future; enter a move when it has happened.", "path"};
}

Response Api::create_load(const Request& request) {
  const LoadDefinition wanted = read_load_body(with_rework(request.body), parts_.plant);
  check_times(wanted);
  const std::int64_t now = parts_.clock.now_us();
  LoadDefinition load;
  storage::LoadRow row;
  as_conflict("chamber-in-use", "Another load is in this chamber", [&] {
    // A line that is pushed while its tray is entered carries that tray too.
    for (int left = 3;; --left) {
      load = wanted;
      std::optional<storage::LineSeen> seen;
      if (load.path.size() == 1 && load.first_furnace().line) {
        auto reader = readers_.take();
        seen = line_seen(load.first_furnace().id, *reader);
        follow_line(load, *reader, now);
      }
      row = row_of(load);
      row.created_us = now;
      try {
        row.id = parts_.store.create_load(row, stays_of(load),
                                          {now, load.person, "start load", "", "", load_body(load)}, seen);
        return 0;
      } catch (const storage::StorageError& error) {
        if (error.fault != storage::StorageFault::misuse || !seen || left == 1) throw;
      }
    }
  });
  row.revision = 1;
  parts_.loads_changed();
  return {201,
          "application/json",
          load_json(row, load),
          {{"Location", "/api/v1/loads/" + std::to_string(row.id)}}};
}

Response Api::list_loads(const Request& request) {
  std::optional<bool> open;
  if (const auto it = request.query.find("state"); it != request.query.end()) {
    if (it->second != "open" && it->second != "ended")
      throw Problem{422, invalid_request, "The state cannot be used", "state: expected open or ended.",
                    "state"};
    open = it->second == "open";
  }
  const auto furnace = request.query.find("furnace");
  const int limit = limit_from(request);
  auto reader = readers_.take();
  const auto rows =
      reader->loads(furnace == request.query.end() ? "" : furnace->second, open, cursor_from(request), limit);
  const bool more = rows.size() == static_cast<std::size_t>(limit);
  return {200, "application/json", loads_json(rows, more ? std::optional(rows.back().id) : std::nullopt), {}};
}

Response Api::show_load(const Request& request) {
  const FoundLoad found = find_load(request);
  return {200, "application/json", load_json(found.row, *found.definition), {}};
}

Response Api::add_note(const Request& request) {
  const FoundLoad found = find_load(request);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const storage::LoadNote note{0, found.row.id, parts_.clock.now_us(), fields.word("person", 80),
                               fields.word("text", 1000)};
  fields.finish();
  const std::int64_t id = parts_.store.add_note(note);
  parts_.loads_changed();
  const Json json{{"id", id}, {"at", format_time(note.at_us)}, {"person", note.person}, {"text", note.text}};
  return {201, "application/json", dumped(json), {}};
}

Response Api::end_load(const Request& request) {
  FoundLoad found = find_load(request);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const std::int64_t now = parts_.clock.now_us();
  const std::string person = fields.word("person", 80);
  const std::int64_t ended = fields.has("ended_at") ? fields.time("ended_at") : now;
  fields.finish();
  refuse_ended(found);
  const auto tolerance_us = static_cast<std::int64_t>(parts_.settings.ingest.future_tolerance_s * 1e6);
  if (ended <= found.row.started_us || ended > now + tolerance_us)
    throw Problem{422, invalid_request, "The end cannot be right",
                  "ended_at: expected a time after the start (" + format_time(found.row.started_us) +
                      ") and not in the future; it is " + format_time(now) + " now.",
                  "ended_at"};
  LoadDefinition load = *found.definition;
  load.end_at(ended);
  if (load.last_place().from_us >= ended)
    throw Problem{422, invalid_request, "The end cannot be right",
                  "ended_at: the load moved at " + format_time(load.last_place().from_us) +
                      ", after that. Correct its path first.",
                  "ended_at"};
  return changed(found, load,
                 {now, person, "end load", "", "", Json{{"ended_at", format_time(ended)}}.dump()});
}

}  // namespace hearthfront::server
