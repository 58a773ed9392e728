// Logger files: uploads, proposals and previews of how they are read, and the mappings saved for a furnace.
#include <algorithm>

#include "server/api/api.h"
#include "server/api/csv_documents.h"
#include "server/api/route_guard.h"
#include "server/base/json_fields.h"
#include "server/ingest/csv_mapping_json.h"

namespace hearthfront::server {
namespace {

constexpr const char* library_kind = "csv_mapping";

std::string key_of(const Furnace& furnace, const std::string& name) {
  return furnace.id + "/" + name;
}

KnownMapping read_saved(storage::LibraryRow row, const Furnace& furnace, const std::string& name) {
  KnownMapping known;
  known.replaces_plant_file = furnace.csv_mapping(name) != nullptr;
  try {
    known.mapping = read_csv_mapping_json(row.json, furnace, name, "");
  } catch (const Problem& problem) {
    known.mapping.name = name;
    known.fault = problem.detail;
  }
  known.saved = std::move(row);
  return known;
}

// By name; a saved mapping stands in place of the plant file's of the same name.
std::vector<KnownMapping> known_mappings(storage::Reader& reader, const Furnace& furnace) {
  std::vector<KnownMapping> known;
  const std::string prefix = key_of(furnace, "");
  for (storage::LibraryRow& row : reader.library(library_kind)) {
    if (!row.key.starts_with(prefix)) continue;
    const std::string name = row.key.substr(prefix.size());
    known.push_back(read_saved(std::move(row), furnace, name));
  }
  for (const CsvMapping& mapping : furnace.csv_mappings) {
    const bool replaced = std::any_of(known.begin(), known.end(), [&](const KnownMapping& each) {
      return each.mapping.name == mapping.name;
    });
    if (!replaced) known.push_back({mapping, {}, false, {}});
  }
  std::sort(known.begin(), known.end(),
            [](const KnownMapping& a, const KnownMapping& b) { return a.mapping.name < b.mapping.name; });
  return known;
}

const std::string* query_of(const Request& request, const char* name) {
  const auto found = request.query.find(name);
  return found == request.query.end() ? nullptr : &found->second;
}

}  // namespace

void Api::add_csv_routes() {
  HttpServer& http = parts_.http;
  http.route("POST", "/api/v1/furnaces/{}/log", guarded([this](const Request& r) { return take_log(r); }));
  http.route("POST", "/api/v1/furnaces/{}/log/guess",
             guarded([this](const Request& r) { return guess_log(r); }));
  http.route("POST", "/api/v1/furnaces/{}/log/preview",
             guarded([this](const Request& r) { return preview_log(r); }));
  http.route("GET", "/api/v1/furnaces/{}/mappings",
             guarded([this](const Request& r) { return list_mappings(r); }));
  http.route("PUT", "/api/v1/furnaces/{}/mappings/{}",
             guarded([this](const Request& r) { return save_mapping(r); }));
}

CsvMapping Api::mapping_of(const Request& request, const Furnace& furnace) {
  std::vector<KnownMapping> known = known_mappings(*readers_.take(), furnace);
  const std::string* name = query_of(request, "mapping");
  std::string names;
  for (KnownMapping& each : known) {
    names += (names.empty() ? "" : ", ") + each.mapping.name;
    if (name ? each.mapping.name != *name : known.size() != 1) continue;
    if (each.fault.empty()) return std::move(each.mapping);
    throw Problem{422, "invalid-mapping", "The mapping can no longer be used",
                  "Mapping \"" + each.mapping.name + "\": " + each.fault +
                      " Mend it under /api/v1/furnaces/" + furnace.id + "/mappings.",
                  "mapping"};
  }
  throw Problem{422, "unknown-mapping", "Which columns are which?",
                names.empty() ? "No logger file is described for this furnace, neither in the plant file "
                                "([[furnace.csv]]) nor under /api/v1/furnaces/" +
                                    furnace.id + "/mappings."
                              : "Add ?mapping=NAME; this furnace knows: " + names + ".",
                "mapping"};
}

Response Api::take_log(const Request& request) {
  const Furnace& furnace = find_furnace(request);
  const CsvMapping mapping = mapping_of(request, furnace);
  const std::string* part = query_of(request, "part");
  if (part && *part != "true" && *part != "false")
    throw Problem{422, "invalid-request", "The query cannot be used", "part: expected true or false.",
                  "part"};
  const CsvExtent extent = part && *part == "true" ? CsvExtent::part : CsvExtent::whole;
  const CsvReport report = accept_csv(parts_.acceptor, request.body, furnace, mapping, extent);
  for (const auto& [refusal, count] : report.refused_by_reason)
    parts_.metrics.add_refused(text(refusal), static_cast<double>(count));
  Json problems = Json::array();
  for (const auto& problem : report.problems)
    problems.push_back({{"line", problem.line}, {"reason", problem.reason}});
  const Json json{{"rows", report.rows},
                  {"stored", report.stored},
                  {"duplicate", report.duplicate},
                  {"conflict", report.conflict},
                  {"refused", report.refused},
                  {"no_value", report.no_value},
                  {"problems", std::move(problems)}};
  return {200, "application/json", dumped(json), {}};
}

Response Api::guess_log(const Request& request) {
  const Furnace& furnace = find_furnace(request);
  const CsvGuess guess = guess_csv_mapping(request.body, furnace, parts_.clock.now_us());
  const CsvPreview preview =
      preview_csv(request.body, furnace, guess.mapping,
                  [this](const RawReading& item) { return parts_.acceptor.would_be(item); });
  return {200, "application/json", guess_json(guess, preview), {}};
}

Response Api::preview_log(const Request& request) {
  const Furnace& furnace = find_furnace(request);
  std::string_view file = request.body;
  CsvMapping mapping;
  if (query_of(request, "mapping")) {
    mapping = mapping_of(request, furnace);
  } else {
    const std::size_t end = file.find('\n');
    if (end == std::string_view::npos || file.front() != '{')
      throw Problem{
          422, "invalid-mapping", "Which columns are which?",
          "Name a saved mapping as ?mapping=NAME, or let the body begin with one line of JSON, the mapping, "
          "and the file follow after the line end.",
          "mapping"};
    mapping = read_csv_mapping_json(file.substr(0, end), furnace, "");
    file.remove_prefix(end + 1);
  }
  const CsvPreview preview = preview_csv(
      file, furnace, mapping, [this](const RawReading& item) { return parts_.acceptor.would_be(item); });
  return {200, "application/json", preview_json(preview), {}};
}

Response Api::list_mappings(const Request& request) {
  const Furnace& furnace = find_furnace(request);
  return {200, "application/json", mappings_json(known_mappings(*readers_.take(), furnace)), {}};
}

Response Api::save_mapping(const Request& request) {
  const Furnace& furnace = find_furnace(request);
  const std::string& name = request.path_parameters.at(1);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", "invalid-mapping");
  storage::LibraryRow row;
  row.kind = library_kind;
  row.key = key_of(furnace, name);
  row.name = name;
  row.at_us = parts_.clock.now_us();
  row.person = fields.word("person", 80);
  row.json = csv_mapping_json(read_csv_mapping_json(dumped(fields.object("mapping")), furnace, name));
  const int expected = fields.integer("expected_version", 0, 1'000'000'000);
  fields.finish();
  const auto before = readers_.take()->library_item(library_kind, row.key);
  try {
    row.version = parts_.store.save_library(row, expected,
                                            {row.at_us, row.person, "save logger mapping",
                                             "mapping " + row.key, before ? before->json : "", row.json});
  } catch (const storage::StorageError& error) {
    if (error.fault != storage::StorageFault::misuse) throw;
    throw Problem{409, "mapping-changed", "Another version of the mapping is there already", error.what(),
                  "expected_version"};
  }
  return {200, "application/json", mapping_json(read_saved(std::move(row), furnace, name)), {}};
}

}  // namespace hearthfront::server
