// Alerts: what is active and past, and what people do with it.
#include <algorithm>
#include <charconv>

#include "server/alerts/alert_json.h"
#include "server/api/api.h"
#include "server/api/document_parts.h"
#include "server/api/paging.h"
#include "server/api/route_guard.h"
#include "server/base/time_text.h"

namespace hearthfront::server {
namespace {

constexpr std::int64_t longest_shelf_us = 7LL * 86'400'000'000;

Problem unknown_alert(const std::string& id) {
  return {404, "unknown-alert", "There is no such alert", "No alert has the id \"" + id + "\".", ""};
}

std::int64_t whole_number(const std::string& text) {
  std::int64_t id = 0;
  const char* end = text.data() + text.size();
  const auto [stop, error] = std::from_chars(text.data(), end, id);
  return error == std::errc{} && stop == end ? id : 0;
}

std::int64_t id_from(const Request& request) {
  const std::int64_t id = whole_number(request.path_parameters.at(0));
  if (id < 1) throw unknown_alert(request.path_parameters.at(0));
  return id;
}

// What the keeper refuses, as answers.
template <typename Call>
void as_answer(std::int64_t id, Call call) {
  try {
    call();
  } catch (const UnknownAlert&) {
    throw unknown_alert(std::to_string(id));
  } catch (const AlertRefusal& refusal) {
    throw Problem{409, refusal.type, "The alert is not as expected", refusal.what(), ""};
  }
}

storage::AlertFilter filter_from(const Request& request) {
  storage::AlertFilter filter;
  filter.past = false;
  if (const auto state = request.query.find("state"); state != request.query.end()) {
    if (state->second == "all")
      filter.past.reset();
    else if (state->second == "past")
      filter.past = true;
    else if (state->second != "active")
      throw Problem{422, invalid_request, "The state cannot be used",
                    "state: expected \"active\", \"past\" or \"all\".", "state"};
  }
  if (const auto furnace = request.query.find("furnace"); furnace != request.query.end())
    filter.furnace = furnace->second;
  if (const auto load = request.query.find("load"); load != request.query.end()) {
    filter.load = whole_number(load->second);
    if (filter.load < 1)
      throw Problem{422, invalid_request, "The load cannot be used", "load: expected the id of a load.",
                    "load"};
  }
  filter.before_id = cursor_from(request);
  filter.limit = limit_from(request);
  return filter;
}

Json event_json(const storage::AlertEvent& event) {
  return {{"at", format_time(event.at_us)},
          {"person", event.person.empty() ? Json(nullptr) : Json(event.person)},
          {"what", event.what},
          {"text", event.text}};
}

const char* text(storage::DeliveryState state) {
  switch (state) {
    case storage::DeliveryState::waiting:
      return "waiting";
    case storage::DeliveryState::delivered:
      return "delivered";
    case storage::DeliveryState::stuck:
      return "stuck";
    case storage::DeliveryState::dropped:
      return "dropped";
  }
  return "";
}

Json delivery_json(const storage::OutboxRow& row) {
  const bool waits = row.state == storage::DeliveryState::waiting;
  return {{"target", row.target},
          {"event", row.event},
          {"state", text(row.state)},
          {"attempts", row.attempts},
          {"next_try", waits ? Json(format_time(row.next_try_us)) : Json(nullptr)},
          {"delivered_at", time_or_null(row.delivered_us)},
          {"error", row.last_error.empty() ? Json(nullptr) : Json(row.last_error)},
          {"key", row.key}};
}

AlertNames names_from(const Plant& plant, storage::Reader& reader) {
  return {plant, [&reader](std::int64_t id) -> std::optional<std::string> {
            const auto load = reader.load(id);
            return load ? std::optional(load->name) : std::nullopt;
          }};
}

}  // namespace

void Api::add_alert_routes() {
  HttpServer& http = parts_.http;
  http.route("GET", "/api/v1/alerts", guarded([this](const Request& r) { return list_alerts(r); }));
  http.route("GET", "/api/v1/alerts/{}", guarded([this](const Request& r) { return show_alert(r); }));
  http.route("POST", "/api/v1/alerts/{}/acknowledge",
             guarded([this](const Request& r) { return acknowledge_alert(r); }));
  http.route("POST", "/api/v1/alerts/{}/shelve",
             guarded([this](const Request& r) { return shelve_alert(r); }));
  http.route("POST", "/api/v1/alerts/{}/unshelve",
             guarded([this](const Request& r) { return unshelve_alert(r); }));
  http.route("POST", "/api/v1/alerts/{}/notes",
             guarded([this](const Request& r) { return add_alert_note(r); }));
}

Response Api::list_alerts(const Request& request) {
  const storage::AlertFilter filter = filter_from(request);
  auto reader = readers_.take();
  std::vector<storage::AlertRow> rows;
  std::optional<std::int64_t> next;
  if (filter.past == false) {
    // All at once, in the order of need: they are as few as the conditions there can be.
    // Held here: the keeper may publish another list meanwhile.
    const auto list = parts_.alerts.list();
    for (const storage::AlertRow& row : list->active)
      if ((filter.furnace.empty() || row.furnace == filter.furnace) &&
          (filter.load == 0 || row.load == filter.load))
        rows.push_back(row);
  } else {
    rows = reader->alerts(filter);
    if (rows.size() == static_cast<std::size_t>(filter.limit)) next = rows.back().id;
  }
  const AlertNames names = names_from(parts_.plant, *reader);
  Json list = Json::array();
  for (const storage::AlertRow& row : rows)
    list.push_back(alert_json(row, names, reader->delivery_counts(row.id)));
  const Json json{{"alerts", std::move(list)}, {"next_cursor", next ? Json(*next) : Json(nullptr)}};
  return {200, "application/json", dumped(json), {}};
}

Response Api::alert_document(std::int64_t id) {
  auto reader = readers_.take();
  auto row = reader->alert(id);
  const auto list = parts_.alerts.list();
  // What is published has the newest words.
  for (const storage::AlertRow& active : list->active)
    if (active.id == id) row = active;
  if (!row || row->state == storage::AlertState::waiting) throw unknown_alert(std::to_string(id));
  Json json = alert_json(*row, names_from(parts_.plant, *reader), reader->delivery_counts(id));
  json["events"] = Json::array();
  for (const storage::AlertEvent& event : reader->alert_events(id))
    json["events"].push_back(event_json(event));
  json["deliveries"] = Json::array();
  for (const storage::OutboxRow& message : reader->deliveries(id))
    json["deliveries"].push_back(delivery_json(message));
  return {200, "application/json", dumped(json), {}};
}

Response Api::show_alert(const Request& request) {
  return alert_document(id_from(request));
}

Response Api::acknowledge_alert(const Request& request) {
  const std::int64_t id = id_from(request);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const std::string person = fields.word("person", 80);
  const std::string note = fields.has("note") ? fields.word("note", 400) : "";
  fields.finish();
  as_answer(id, [&] { parts_.alerts.acknowledge(id, person, note); });
  return alert_document(id);
}

Response Api::shelve_alert(const Request& request) {
  const std::int64_t id = id_from(request);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const std::string person = fields.word("person", 80), reason = fields.word("reason", 400);
  const std::int64_t until_us = fields.time("until");
  fields.finish();
  const std::int64_t now_us = parts_.clock.now_us();
  if (until_us <= now_us)
    fields.fail("until", "must be in the future; it is " + format_time(now_us) + " now.");
  if (until_us - now_us > longest_shelf_us)
    fields.fail("until",
                "is more than 7 days away: an alert that is in the way for longer needs a change of "
                "the plant or the settings.");
  as_answer(id, [&] { parts_.alerts.shelve(id, person, reason, until_us); });
  return alert_document(id);
}

Response Api::unshelve_alert(const Request& request) {
  const std::int64_t id = id_from(request);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const std::string person = fields.word("person", 80);
  fields.finish();
  as_answer(id, [&] { parts_.alerts.unshelve(id, person); });
  return alert_document(id);
}

Response Api::add_alert_note(const Request& request) {
  const std::int64_t id = id_from(request);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const std::string person = fields.word("person", 80), text = fields.word("text", 2000);
  fields.finish();
  as_answer(id, [&] { parts_.alerts.add_note(id, person, text); });
  return alert_document(id);
}

}  // namespace hearthfront::server
