// The ways in over HTTP: JSON readings and logger files.
#include "server/api/api.h"
#include "server/api/route_guard.h"
#include "server/base/json_fields.h"
#include "server/ingest/csv.h"
#include "server/ingest/readings_json.h"

namespace hearthfront::server {

void Api::add_reading_routes() {
  parts_.http.route("POST", "/api/v1/readings",
                    guarded([this](const Request& r) { return take_readings(r); }));
  parts_.http.route("POST", "/api/v1/furnaces/{}/log",
                    guarded([this](const Request& r) { return take_log(r); }));
}

Response Api::take_readings(const Request& request) {
  DecodedReadings decoded = decode_readings(request.body, parts_.acceptor.batch_size());
  if (decoded.problem) throw Problem(*decoded.problem);
  const Accepted accepted = parts_.acceptor.accept(decoded.items);
  // Thousands of fixed words: written as they are rather than built into a tree.
  std::string results = "[";
  for (const ReadingOutcome& outcome : accepted.outcomes) {
    if (results.size() > 1) results += ',';
    if (outcome.disposition == Disposition::refused) {
      results += dumped({{"refused", text(outcome.refusal)}, {"detail", outcome.detail}});
      parts_.metrics.add_refused(text(outcome.refusal));
    } else {
      results.append("\"").append(text(outcome.disposition)).append("\"");
    }
  }
  results += ']';
  std::string body = dumped({{"stored", accepted.stored},
                             {"duplicate", accepted.duplicate},
                             {"conflict", accepted.conflict},
                             {"refused", accepted.refused}});
  body.pop_back();
  body.append(",\"results\":").append(results).append("}");
  return {200, "application/json", std::move(body), {}};
}

Response Api::take_log(const Request& request) {
  const Furnace& furnace = find_furnace(request);
  const auto named = request.query.find("mapping");
  const CsvMapping* mapping = nullptr;
  if (named != request.query.end())
    mapping = furnace.csv_mapping(named->second);
  else if (furnace.csv_mappings.size() == 1)
    mapping = &furnace.csv_mappings.front();
  if (!mapping) {
    std::string known;
    for (const CsvMapping& m : furnace.csv_mappings) known += (known.empty() ? "" : ", ") + m.name;
    throw Problem{422, "unknown-mapping", "Which columns are which?",
                  known.empty()
                      ? "The plant file describes no logger file for this furnace ([[furnace.csv]])."
                      : "Add ?mapping=NAME; this furnace knows: " + known + ".",
                  "mapping"};
  }
  const CsvReport report = accept_csv(parts_.acceptor, request.body, furnace, *mapping);
  for (const auto& [refusal, count] : report.refused_by_reason)
    parts_.metrics.add_refused(text(refusal), static_cast<double>(count));
  Json problems = Json::array();
  for (const auto& problem : report.problems)
    problems.push_back({{"line", problem.line}, {"reason", problem.reason}});
  const Json json{{"rows", report.rows},           {"stored", report.stored},
                  {"duplicate", report.duplicate}, {"conflict", report.conflict},
                  {"refused", report.refused},     {"problems", std::move(problems)}};
  return {200, "application/json", dumped(json), {}};
}

}  // namespace hearthfront::server
