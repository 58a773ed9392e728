// Readings as JSON over HTTP.
#include "server/api/api.h"
#include "server/api/route_guard.h"
#include "server/base/json_fields.h"
#include "server/ingest/readings_json.h"

namespace hearthfront::server {

void Api::add_reading_routes() {
  parts_.http.route("POST", "/api/v1/readings",
                    guarded([this](const Request& r) { return take_readings(r); }));
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

}  // namespace hearthfront::server
