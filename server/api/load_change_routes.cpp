// What people change about a load: correct, move, cancel; what was changed; starting the same again; pushing
// a line. Every change is a dated revision by a named person, audited in its transaction.
#include <algorithm>
#include <set>

#include "server/api/api.h"
#include "server/api/documents.h"
#include "server/api/route_guard.h"
#include "server/base/time_text.h"
#include "server/live/definition_fields.h"
#include "server/live/definition_json.h"
#include "server/live/push_line.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t changes_shown = 60;

std::string short_text(const Json& value) {
  const std::string text = value.is_string() ? value.get<std::string>() : value.dump();
  return text.size() > 120 ? text.substr(0, 117) + "..." : text;
}

// Leaves that differ, as {field, before, after}.
void add_changes(const Json& before, const Json& after, const std::string& path, Json& changes) {
  if (before == after || changes.size() >= changes_shown) return;
  const bool objects = before.is_object() && after.is_object();
  const bool lists = before.is_array() && after.is_array() && before.size() == after.size() &&
                     std::any_of(after.begin(), after.end(), [](const Json& j) { return j.is_structured(); });
  if (lists) {
    for (std::size_t i = 0; i < after.size(); ++i)
      add_changes(before[i], after[i], path + "[" + std::to_string(i) + "]", changes);
    return;
  }
  if (!objects) {
    changes.push_back({{"field", path},
                       {"before", before.is_null() ? Json(nullptr) : Json(short_text(before))},
                       {"after", after.is_null() ? Json(nullptr) : Json(short_text(after))}});
    return;
  }
  std::set<std::string> names;
  for (const auto& [name, value] : before.items()) names.insert(name);
  for (const auto& [name, value] : after.items()) names.insert(name);
  const std::string prefix = path.empty() ? "" : path + ".";
  for (const std::string& name : names) {
    std::string inner = prefix;
    inner += name;
    add_changes(before.value(name, Json(nullptr)), after.value(name, Json(nullptr)), inner, changes);
  }
}

Json load_part(const std::string& stored) {
  if (stored.empty()) return nullptr;
  return Json::parse(stored).value("load", Json(nullptr));
}

}  // namespace

void Api::refuse_ended(const FoundLoad& found) const {
  if (!found.row.ended_us) return;
  throw Problem{409, "load-already-ended", "The load has already ended",
                "Load " + found.row.name + (found.row.cancelled ? " was cancelled at " : " ended at ") +
                    format_time(*found.row.ended_us) + ".",
                ""};
}

Response Api::changed(const FoundLoad& found, const LoadDefinition& load, storage::AuditRow audit,
                      bool cancelled) {
  // What cannot be read again must never be stored: not the load nor its line could go on.
  as_stored(load);
  storage::LoadRow row = row_of(load);
  row.id = found.row.id;
  row.cancelled = cancelled;
  as_conflict("load-changed", "This cannot be changed so", [&] {
    parts_.store.revise_loads(
        {{found.row.revision, row, cancelled ? std::vector<storage::Stay>{} : stays_of(load)}},
        {std::move(audit)});
    return 0;
  });
  parts_.loads_changed();
  row.created_us = found.row.created_us;
  row.revision = found.row.revision + 1;
  return {200, "application/json", load_json(row, load), {}};
}

std::string Api::with_rework(const std::string& body) {
  if (body.find("rework_of") == std::string::npos) return body;
  Json json = parse_body(body);
  if (!json.is_object() || !json.contains("items") || !json["items"].is_array()) return body;
  auto reader = readers_.take();
  for (std::size_t i = 0; i < json["items"].size(); ++i) {
    Json& item = json["items"][i];
    if (!item.is_object() || !item.contains("rework_of")) continue;
    if (item["rework_of"].is_null()) {
      item.erase("rework_of");
      continue;
    }
    const std::string path = "items[" + std::to_string(i) + "].rework_of";
    JsonFields fields(item["rework_of"], path, "invalid-load");
    const std::int64_t earlier = fields.integer("load", 1, 2'000'000'000);
    const std::string name = fields.word("item", 40);
    fields.finish();
    const auto before = load_of(earlier, *reader);
    if (!before || !before->row.ended_us || before->row.cancelled)
      fields.fail("load", "load " + std::to_string(earlier) + " has no final result; it must have ended.");
    const Json result = Json::parse(final_result(*before, *reader));
    const Json* found = nullptr;
    for (const Json& each : result.at("items"))
      if (each.at("name") == name) found = &each;
    if (!found) fields.fail("item", "load " + std::to_string(earlier) + " has no item \"" + name + "\".");
    item["initial_profile"] = {{"load", earlier},
                               {"item", name},
                               {"depth_mm", found->at("profile").at("depth_mm")},
                               {"carbon_wt_pct", found->at("profile").at("carbon_wt_pct")}};
    item.erase("rework_of");
  }
  return json.dump();
}

Response Api::correct_load(const Request& request) {
  FoundLoad found = find_load(request);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const std::string person = fields.word("person", 80), reason = fields.word("reason", 400);
  found.row.revision = fields.integer("expected_revision", 1, 1'000'000'000);
  const Json& wanted = fields.object("load");
  fields.finish();
  if (found.row.cancelled) refuse_ended(found);
  // The load keeps its own copies of furnace settings: a plant file edited since must not slip in.
  Plant plant = parts_.plant;
  for (Furnace& furnace : plant.furnaces)
    if (const Furnace* copy = found.definition->furnace(furnace.id)) furnace = *copy;
  for (const Furnace& copy : found.definition->furnaces)
    if (!plant.furnace(copy.id)) plant.furnaces.push_back(copy);
  LoadDefinition load = read_load_body(with_rework(wanted.dump()), plant);
  // Adopted plans are acts of people; a correction that says nothing of them leaves them.
  if (!wanted.contains("plans") || wanted["plans"].is_null()) load.plans = found.definition->plans;
  if (load.ended_us) load.end_at(*load.ended_us);
  check_times(load);
  return changed(found, load,
                 {parts_.clock.now_us(), person, "correct load", "", "", Json{{"reason", reason}}.dump()});
}

Response Api::move_load(const Request& request) {
  const FoundLoad found = find_load(request);
  refuse_ended(found);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const std::int64_t now = parts_.clock.now_us();
  const std::string person = fields.word("person", 80);
  PathStep step{fields.has("at") ? fields.time("at") : now, "", ""};
  LoadDefinition load = *found.definition;
  if (!(fields.has("outside") && fields.flag("outside"))) {
    step.furnace = fields.has("furnace") ? fields.word("furnace", 60) : load.last_furnace_place().furnace;
    const Furnace* furnace = load.furnace(step.furnace);
    if (!furnace && (furnace = parts_.plant.furnace(step.furnace))) load.furnaces.push_back(*furnace);
    if (!furnace) fields.fail("furnace", "\"" + step.furnace + "\" is not in the plant file.");
    furnace = load.furnace(step.furnace);
    step.chamber = fields.has("chamber") || furnace->chambers.size() > 1 ? fields.word("chamber", 60)
                                                                         : furnace->chambers.front().id;
    if (!furnace->chamber(step.chamber)) fields.fail("chamber", "the furnace has no chamber with this id.");
  }
  fields.finish();
  const PathStep& last = load.last_place();
  if (step.furnace == last.furnace && step.chamber == last.chamber)
    fields.fail("chamber", "the load is there already.");
  if (step.from_us <= last.from_us)
    fields.fail("at", "must be later than " + format_time(last.from_us) + ", when it came to where it is.");
  const bool onto_line = !step.outside() && step.furnace != last.furnace;
  load.path.push_back(step);
  check_times(load);
  // One that is entered late is where the line has carried it since.
  if (onto_line) follow_line(load, *readers_.take(), now);
  const std::string where = step.outside() ? "outside" : step.furnace + " " + step.chamber;
  return changed(
      found, load,
      {now, person, "move load", "", "", Json{{"at", format_time(step.from_us)}, {"to", where}}.dump()});
}

Response Api::cancel_load(const Request& request) {
  const FoundLoad found = find_load(request);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const std::string person = fields.word("person", 80), reason = fields.word("reason", 400);
  fields.finish();
  if (found.row.cancelled) refuse_ended(found);
  LoadDefinition load = *found.definition;
  const std::int64_t now = parts_.clock.now_us();
  if (!load.ended_us) load.end_at(std::max(now, load.last_place().from_us + 1));
  return changed(found, load, {now, person, "cancel load", "", "", Json{{"reason", reason}}.dump()}, true);
}

Response Api::revisions(const Request& request) {
  const FoundLoad found = find_load(request);
  auto reader = readers_.take();
  auto rows = reader->revisions(found.row.id);
  // The reason stands in the audit row of the same moment.
  std::map<std::int64_t, Json> reasons;
  for (const storage::AuditRow& audit : reader->audit("load " + std::to_string(found.row.id), 1000)) {
    const Json after = Json::parse(audit.after_json, nullptr, false);
    if (after.is_object() && after.contains("reason")) reasons[audit.at_us] = after["reason"];
  }
  Json list = Json::array();
  for (auto row = rows.rbegin(); row != rows.rend(); ++row) {
    Json changes = Json::array();
    if (!row->definition_before.empty())
      add_changes(load_part(row->definition_before), load_part(row->definition_after), "", changes);
    const auto reason = reasons.find(row->at_us);
    list.push_back({{"revision", row->revision},
                    {"at", format_time(row->at_us)},
                    {"person", row->person},
                    {"what", row->what},
                    {"reason", reason == reasons.end() ? Json(nullptr) : reason->second},
                    {"changes", std::move(changes)}});
  }
  return {200, "application/json", dumped({{"revisions", std::move(list)}}), {}};
}

Response Api::recent_loads(const Request& request) {
  const Furnace& furnace = find_furnace(request);
  auto reader = readers_.take();
  Json loads = Json::array();
  std::set<std::string> seen;
  for (const storage::LoadRow& row : reader->loads(furnace.id, std::nullopt, 0, 100)) {
    if (row.cancelled || loads.size() == 8) continue;
    Json body = load_part(row.definition_json);
    std::string kind = body.at("recipe").at("name").get<std::string>();
    Json items = Json::array();
    for (Json& item : body.at("items")) {
      item.erase("initial_profile");  // the next load is no rework
      kind += "|" + item.at("part").get<std::string>() + "|" + item.at("steel").at("name").get<std::string>();
      items.push_back({{"part", item.at("part")},
                       {"quantity", item.at("quantity")},
                       {"steel", item.at("steel").at("name")}});
    }
    if (!seen.insert(kind).second) continue;
    for (const char* own : {"name", "person", "started_at", "ended_at", "path", "masks"}) body.erase(own);
    loads.push_back({{"id", row.id},
                     {"name", row.name},
                     {"started_at", format_time(row.started_us)},
                     {"recipe", body.at("recipe").at("name")},
                     {"items", std::move(items)},
                     {"body", std::move(body)}});
  }
  return {200, "application/json", dumped({{"loads", std::move(loads)}}), {}};
}

Response Api::push(const Request& request) {
  const Furnace& furnace = find_furnace(request);
  if (!furnace.line)
    throw Problem{422, invalid_request, "This furnace is not pushed",
                  furnace.name + " is no pusher line; move its loads one by one.", ""};
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const std::string person = fields.word("person", 80);
  const std::int64_t now = parts_.clock.now_us();
  const std::int64_t at = fields.has("at") ? fields.time("at") : now;
  fields.finish();
  if (at > now + static_cast<std::int64_t>(parts_.settings.ingest.future_tolerance_s * 1e6))
    fields.fail("at", "lies in the future; enter a push when it has happened.");
  auto reader = readers_.take();
  const auto moved = as_conflict("push-refused", "The line was not pushed", [&] {
    return push_line(furnace, parts_.store, *reader, {furnace.id, at, person, "person"}, now);
  });
  parts_.loads_changed();
  Json list = Json::array();
  for (const MovedLoad& load : moved)
    list.push_back({{"id", load.id},
                    {"name", load.name},
                    {"from", load.from},
                    {"to", load.to ? Json(*load.to) : Json(nullptr)}});
  return {200, "application/json", dumped({{"at", format_time(at)}, {"moved", std::move(list)}}), {}};
}

}  // namespace hearthfront::server
