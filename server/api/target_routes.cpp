// Where alerts are sent: how it goes, a test, and another try for what was given up.
#include <map>

#include "server/api/api.h"
#include "server/api/route_guard.h"
#include "server/base/json_fields.h"
#include "server/base/time_text.h"
#include "server/delivery/dispatcher.h"
#include "server/delivery/routing.h"

namespace hearthfront::server {
namespace {

Json word_or_null(const std::string& word) {
  return word.empty() ? Json(nullptr) : Json(word);
}

std::string person_of(const Request& request) {
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  std::string person = fields.word("person", 80);
  fields.finish();
  return person;
}

}  // namespace

const DeliveryTarget& Api::find_target(const Request& request) const {
  const std::string& name = request.path_parameters.at(0);
  const DeliveryTarget* target = parts_.dispatcher.find(name);
  if (!target)
    throw Problem{
        404, "unknown-target", "There is no such target",
        "\"" + name + "\" is no [[target]] of the settings file. GET /api/v1/targets lists the names.", ""};
  return *target;
}

Response Api::targets(const Request&) {
  std::map<std::string, storage::TargetState> states;
  for (storage::TargetState& state : readers_.take()->targets()) {
    std::string name = state.target;
    states[name] = std::move(state);
  }
  Json list = Json::array();
  for (const DeliveryTarget& target : parts_.dispatcher.targets()) {
    const storage::TargetState& state = states[target.name];
    // What stands in the way now goes before what went wrong last.
    const std::string fault = parts_.dispatcher.fault(target);
    list.push_back({{"name", target.name},
                    {"kind", target.kind()},
                    {"where", target.where()},
                    {"routes", routes_sentence(target)},
                    {"waiting", state.waiting},
                    {"stuck", state.stuck},
                    {"last_delivered_at",
                     state.last_delivered_us ? Json(format_time(*state.last_delivered_us)) : Json(nullptr)},
                    {"last_error", word_or_null(fault.empty() ? state.last_error : fault)}});
  }
  return {200, "application/json", dumped({{"targets", std::move(list)}}), {}};
}

Response Api::test_target(const Request& request) {
  const DeliveryTarget& target = find_target(request);
  const std::string person = person_of(request);
  const SendResult result = parts_.dispatcher.test(target, person);
  const bool delivered = result.outcome == SendOutcome::delivered;
  const Json answer{{"delivered", delivered}, {"error", word_or_null(result.error)}};
  parts_.store.add_audit(
      {parts_.clock.now_us(), person, "test target", "target " + target.name, "", answer.dump()});
  return {200, "application/json", dumped(answer), {}};
}

Response Api::retry_target(const Request& request) {
  const DeliveryTarget& target = find_target(request);
  const std::string person = person_of(request);
  const std::int64_t retried = parts_.store.retry_stuck(
      target.name, {parts_.clock.now_us(), person, "retry target", "target " + target.name, "", ""});
  parts_.dispatcher.wake();
  return {200, "application/json", dumped({{"retried", retried}}), {}};
}

void Api::add_target_routes() {
  auto& http = parts_.http;
  http.route("GET", "/api/v1/targets", guarded([this](const Request& r) { return targets(r); }));
  http.route("POST", "/api/v1/targets/{}/test", guarded([this](const Request& r) { return test_target(r); }));
  http.route("POST", "/api/v1/targets/{}/retry",
             guarded([this](const Request& r) { return retry_target(r); }));
}

}  // namespace hearthfront::server
