// The library: parts and recipes, each with all its versions. A load copies what it needs of an entry.
#include <algorithm>

#include "server/api/api.h"
#include "server/api/route_guard.h"
#include "server/base/time_text.h"
#include "server/live/definition_fields.h"

namespace hearthfront::server {
namespace {

constexpr const char* invalid_entry = "invalid-library-entry";

std::string kind_from(const Request& request) {
  const std::string& kind = request.path_parameters.at(0);
  if (kind == "parts") return "part";
  if (kind == "recipes") return "recipe";
  throw Problem{404, "unknown-library", "There is no such library", "The library has parts and recipes.", ""};
}

Json entry_json(const storage::LibraryRow& row) {
  return {{"key", row.key},
          {"version", row.version},
          {"name", row.name},
          {"at", format_time(row.at_us)},
          {"person", row.person},
          {"retired", row.retired},
          {"body", Json::parse(row.json)}};
}

// What is stored is what was understood, every default filled in.
Json checked_part(const Json& body, const Plant& plant) {
  JsonFields fields(body, "body", invalid_entry);
  Item item;
  item.name = "A";
  constexpr double usual_lag_min = 20;
  const bool own_lag = fields.has("lag_min");
  read_part(fields, item, plant, usual_lag_min);
  fields.finish();
  settle_criterion(item, {}, "body");
  Json part = part_json(item);
  // Without one of its own a part lags as its furnace says.
  if (!own_lag) part.erase("lag_min");
  return part;
}

Json checked_recipe(const Json& body, const std::string& name) {
  JsonFields fields(body, "body", invalid_entry);
  const Quench quench = read_quench(fields);
  Json recipe{{"name", name}, {"segments", fields.array("segments", 1, 40)}};
  fields.finish();
  recipe = recipe_json(read_recipe(recipe, "body"));
  recipe.erase("name");
  recipe["quench"] = quench_json(quench);
  return recipe;
}

void check_key(const std::string& key) {
  const bool fits = !key.empty() && key.size() <= 80 && std::all_of(key.begin(), key.end(), [](char c) {
    return (c >= 'a' && c <= 'z') || (c >= '0' && c <= '9') || c == '-' || c == '_' || c == '.';
  });
  if (!fits)
    throw Problem{422, invalid_entry, "The key cannot be used",
                  "A key has 1 to 80 of a-z, 0-9 and - _ . ; the name may have any letters.", "key"};
}

}  // namespace

void Api::add_library_routes() {
  HttpServer& http = parts_.http;
  http.route("GET", "/api/v1/library/{}", guarded([this](const Request& r) { return library(r); }));
  http.route("GET", "/api/v1/library/{}/{}", guarded([this](const Request& r) { return library_item(r); }));
  http.route("PUT", "/api/v1/library/{}/{}", guarded([this](const Request& r) { return save_library(r); }));
}

Response Api::library(const Request& request) {
  auto reader = readers_.take();
  Json entries = Json::array();
  for (const storage::LibraryRow& row : reader->library(kind_from(request)))
    entries.push_back(entry_json(row));
  return {200, "application/json", dumped({{"entries", std::move(entries)}}), {}};
}

Response Api::library_item(const Request& request) {
  auto reader = readers_.take();
  const auto versions = reader->library_versions(kind_from(request), request.path_parameters.at(1));
  if (versions.empty())
    throw Problem{404, "unknown-library-entry", "There is no such entry",
                  "The library has no \"" + request.path_parameters.at(1) + "\".", ""};
  Json json = entry_json(versions.back());
  json["versions"] = Json::array();
  for (const storage::LibraryRow& row : versions) json["versions"].push_back(entry_json(row));
  return {200, "application/json", dumped(json), {}};
}

Response Api::save_library(const Request& request) {
  storage::LibraryRow row;
  row.kind = kind_from(request);
  row.key = request.path_parameters.at(1);
  check_key(row.key);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_entry);
  row.person = fields.word("person", 80);
  row.name = fields.word("name", 80);
  const std::int64_t expected = fields.integer("expected_version", 0, 1'000'000);
  row.retired = fields.has("retired") && fields.flag("retired");
  const Json& wanted = fields.object("body");
  fields.finish();
  row.json =
      (row.kind == "part" ? checked_part(wanted, parts_.plant) : checked_recipe(wanted, row.name)).dump();
  row.at_us = parts_.clock.now_us();
  std::string before;
  {
    auto reader = readers_.take();
    if (const auto newest = reader->library_item(row.kind, row.key)) before = newest->json;
  }
  const storage::AuditRow audit{row.at_us,
                                row.person,
                                (row.retired ? "retire " : "save ") + row.kind,
                                "library " + row.kind + "/" + row.key,
                                before,
                                row.json};
  row.version = as_conflict("library-changed", "Somebody else changed this entry",
                            [&] { return parts_.store.save_library(row, expected, audit); });
  return {expected == 0 ? 201 : 200, "application/json", dumped(entry_json(row)), {}};
}

}  // namespace hearthfront::server
