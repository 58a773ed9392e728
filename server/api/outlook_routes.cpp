// Trials, proposals and the adopting of a plan. They are worked out on the request's own thread from what the
// engine published last; the engine never waits for them, and at most two run at a time.
#include <algorithm>
#include <chrono>
#include <cmath>

#include "server/api/api.h"
#include "server/api/documents_outlook.h"
#include "server/api/route_guard.h"
#include "server/base/time_text.h"
#include "server/live/definition_fields.h"
#include "server/live/definition_json.h"
#include "server/live/proposal.h"

namespace hearthfront::server {
namespace {

constexpr auto longest_wait = std::chrono::seconds(5);

Problem busy() {
  return {503, "trials-busy", "Too many trials at once",
          "Other trials are still being worked out. Nothing was changed; try again in a few seconds.", ""};
}

void refuse_unknown_items(const std::vector<Segment>& segments, const LoadDefinition& load) {
  for (std::size_t i = 0; i < segments.size(); ++i) {
    const auto& until = segments[i].until;
    if (!until || until->item.empty() ||
        std::any_of(load.items.begin(), load.items.end(),
                    [&](const Item& item) { return item.name == until->item; }))
      continue;
    const std::string path = "segments[" + std::to_string(i) + "].until.item";
    throw Problem{422, invalid_request, "The segment ends by an item that is not there",
                  path + ": the load has no item \"" + until->item + "\".", path};
  }
}

}  // namespace

void Api::add_outlook_routes() {
  HttpServer& http = parts_.http;
  http.route("POST", "/api/v1/loads/{}/trial", guarded([this](const Request& r) { return trial(r); }));
  http.route("POST", "/api/v1/loads/{}/proposal", guarded([this](const Request& r) { return proposal(r); }));
  http.route("POST", "/api/v1/loads/{}/plan", guarded([this](const Request& r) { return adopt_plan(r); }));
}

template <typename Compute>
auto Api::one_of_few(Compute compute) {
  if (!trial_seats_.try_acquire_for(longest_wait)) throw busy();
  struct Leave {
    std::counting_semaphore<>& seats;
    ~Leave() { seats.release(); }
  } leave{trial_seats_};
  return compute();
}

std::shared_ptr<const LoadView> Api::view_with_outlook(const FoundLoad& found) {
  refuse_ended(found);
  auto view = view_of(found);
  if (!view->outlook_base)
    throw Problem{409, "no-outlook", "There is no outlook", view->outlook_missing + " Try again later.", ""};
  return view;
}

solver::StandingLimits Api::standing_limits() const {
  return {parts_.settings.outlook.inside_from, parts_.settings.outlook.missed_from};
}

Response Api::trial(const Request& request) {
  const FoundLoad found = find_load(request);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const std::vector<Segment> segments = read_segments(fields, "segments");
  fields.finish();
  const auto view = view_with_outlook(found);
  refuse_unknown_items(segments, *view->result.definition);
  return one_of_few([&] {
    const auto outlook = make_outlook(*view->outlook_base, segments, standing_limits());
    if (!outlook)
      throw Problem{422, invalid_request, "The trial cannot be computed",
                    "segments: the model fails on this plan; are its temperatures and potentials right?",
                    "segments"};
    outlook->offered_joint_chance = view->outlook->offered_joint_chance;
    return Response{
        200, "application/json", trial_json(*view->result.definition, *view->outlook, *outlook), {}};
  });
}

Response Api::proposal(const Request& request) {
  const FoundLoad found = find_load(request);
  ProposalAsk ask{parts_.settings.outlook.asked_chance, standing_limits()};
  if (!request.body.empty()) {
    const Json body = parse_body(request.body);
    JsonFields fields(body, "", invalid_request);
    if (fields.has("asked_chance"))
      ask.asked_chance = fields.number("asked_chance", 0.5, 0.99, "a share of 1");
    fields.finish();
  }
  const auto view = view_with_outlook(found);
  return one_of_few([&] {
    return Response{200,
                    "application/json",
                    proposal_json(*view, propose(*view->outlook_base, ask), ask.asked_chance),
                    {}};
  });
}

Response Api::adopt_plan(const Request& request) {
  FoundLoad found = find_load(request);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  AdoptedPlan plan;
  plan.person = fields.word("person", 80);
  plan.reason = fields.word("reason", 400);
  found.row.revision = fields.integer("expected_revision", 1, 1'000'000'000);
  plan.recipe.segments = read_segments(fields, "segments");
  fields.finish();
  refuse_ended(found);
  LoadDefinition load = *found.definition;
  plan.recipe.name = load.recipe.name;
  // From the lattice point that was last: the readings since then stay what they are.
  const std::int64_t now = parts_.clock.now_us();
  const std::int64_t lattice_us = std::llround(load.lattice_s * 1e6);
  plan.from_us =
      load.started_us + std::max<std::int64_t>(0, (now - load.started_us) / lattice_us) * lattice_us;
  // Two plans of one minute, or a clock that was set back: the later one is meant.
  while (!load.plans.empty() && load.plans.back().from_us >= plan.from_us) load.plans.pop_back();
  load.plans.push_back(plan);
  load = as_stored(load);
  return changed(found, load,
                 {now, plan.person, "adopt plan", "", "",
                  Json{{"reason", plan.reason}, {"segments", rest_json(plan.recipe.segments)}}.dump()});
}

}  // namespace hearthfront::server
