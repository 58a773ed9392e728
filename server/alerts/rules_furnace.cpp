// Rules on one furnace: silence, gaps, its gas, and its channels.
#include <algorithm>

#include "server/alerts/rule_words.h"

namespace hearthfront::server {
namespace {

// A reading or two may show a channel well again, then not; common practice, no source.
constexpr double channel_clear_min = 15;

ConditionKey of_furnace(const Furnace& furnace, std::string kind, std::string subject) {
  return {std::move(kind), furnace.id, 0, std::move(subject)};
}

Judged judged(const Furnace& furnace, std::string kind, std::int64_t at_us, double clear_hold_min) {
  return {std::move(kind), furnace.id, 0, std::nullopt, at_us, clear_hold_min * 60};
}

// Of several loads that show the same condition the worst one speaks.
void keep(Findings& findings, Situation situation) {
  for (Situation& known : findings.situations) {
    if (known.condition.text() != situation.condition.text()) continue;
    if (situation.severity > known.severity) known = std::move(situation);
    return;
  }
  findings.situations.push_back(std::move(situation));
}

// In the furnace it is booked on, and with gas around it.
bool is_inside(const LoadView& view, const Furnace& furnace) {
  const PathStep& place = view.result.definition->place_at(view.result.state_us);
  return place.furnace == furnace.id;
}

std::string chamber_of(const LoadView& view, const Furnace& furnace) {
  return furnace.chambers.size() > 1 ? view.result.definition->place_at(view.result.state_us).chamber : "";
}

void add_gaps(Findings& findings, const Furnace& furnace, const LoadView& view,
              const AlertSettings& settings) {
  const auto one = [&](const char* input, const InputNow& now) {
    if (now.basis != Basis::held && now.basis != Basis::planned) return;
    Situation situation;
    const std::string chamber = chamber_of(view, furnace);
    situation.condition =
        of_furnace(furnace, "gap", std::string(input) + (chamber.empty() ? "" : ", " + chamber));
    const bool held = now.basis == Basis::held;
    situation.sentence = std::string(held ? "The last " : "No reading of ") + input +
                         (held ? " is held: no newer reading." : ": the recipe's value is assumed.");
    situation.advice = "Check the channel and its line; what it logged meanwhile can still be sent.";
    situation.severity = held ? Severity::note : Severity::warning;
    situation.at_us = view.result.state_us;
    situation.hold_s = settings.hold_min * 60;
    keep(findings, std::move(situation));
  };
  one("temperature", view.temperature);
  one("carbon potential", view.carbon_potential);
}

void add_gas(Findings& findings, const Furnace& furnace, const LoadView& view,
             const AlertSettings& settings) {
  for (const NoteSpan& note : view.result.notes) {
    if (note.note != solver::note_sooting_gas || note.to_us != view.result.state_us) continue;
    Situation situation;
    situation.condition = of_furnace(furnace, "sooting gas", chamber_of(view, furnace));
    situation.sentence = "The gas is rich enough to deposit soot.";
    situation.advice = "Lower the enriching gas; check probe and burners for soot.";
    situation.at_us = view.result.state_us;
    situation.since_us = note.from_us;
    situation.hold_s = settings.hold_min * 60;
    keep(findings, std::move(situation));
  }
  if (!view.result.disagreement_wt_pct) return;
  const double apart = *view.result.disagreement_wt_pct;
  // Sources that come together again just below the tolerance still disagree; common practice, no source.
  if (apart <= 0.7 * furnace.source_tolerance_wt_pct) return;
  Situation situation;
  situation.condition = of_furnace(furnace, "sources disagree", chamber_of(view, furnace));
  situation.present = sources_disagree(view.result);
  situation.sentence = "Carbon sources disagree by " + fixed(apart, 2) + " % C.";
  situation.advice = "Check probe, analyser and dew point against a foil test.";
  situation.at_us = view.result.state_us;
  situation.hold_s = settings.hold_min * 60;
  keep(findings, std::move(situation));
}

// The furnace is silent when all its loads are.
void add_silence(Findings& findings, const Furnace& furnace, const LoadViews& loads, std::int64_t now_us) {
  const LoadView* freshest = nullptr;
  for (const auto& view : loads) {
    if (view->condition != Condition::stale && view->condition != Condition::no_data_yet) return;
    if (!freshest || view->data_us.value_or(0) > freshest->data_us.value_or(0)) freshest = view.get();
  }
  if (!freshest) return;
  Situation situation;
  situation.condition = of_furnace(furnace, "no reading", "");
  situation.severity = Severity::urgent;
  situation.since_us = freshest->data_us.value_or(freshest->row.started_us);
  situation.sentence = freshest->data_us
                           ? "No reading for " + fixed(minutes(*freshest->data_us, now_us), 0) + " min."
                           : "No reading yet: everything shown is assumed from the recipe.";
  situation.advice = "Check the logger and its line. The furnace itself is watched at its own controller.";
  situation.at_us = now_us;
  findings.situations.push_back(std::move(situation));
}

}  // namespace

Findings judge_furnace(const Furnace& furnace, const LoadViews& views, const AlertSettings& settings,
                       std::int64_t now_us) {
  Findings findings;
  LoadViews loads, sighted;
  std::int64_t data_us = 0;
  for (const auto& view : views) {
    if (view->row.furnace != furnace.id || view->condition == Condition::ended) continue;
    if (is_inside(*view, furnace)) loads.push_back(view);
  }
  for (const auto& view : loads) {
    if (view->condition != Condition::live) continue;
    sighted.push_back(view);
    data_us = std::max(data_us, view->result.state_us);
  }
  // The readings are back or not: no second limit, but a logger on a bad line must not ring for each loss.
  findings.judged.push_back(judged(furnace, "no reading", now_us, loads.empty() ? 0.0 : 1.0));
  add_silence(findings, furnace, loads, now_us);
  // While all is silent, that is said, and nothing is known of the gas. Without a load nothing matters.
  if (sighted.empty() && !loads.empty()) return findings;
  for (const char* kind : {"gap", "sooting gas", "sources disagree"})
    findings.judged.push_back(judged(furnace, kind, loads.empty() ? now_us : data_us,
                                     loads.empty() ? 0.0 : settings.clear_hold_min));
  for (const auto& view : sighted) {
    add_gaps(findings, furnace, *view, settings);
    add_gas(findings, furnace, *view, settings);
  }
  return findings;
}

Findings judge_channels(const Furnace& furnace, const std::vector<NamedHealth>& channels,
                        const AlertSettings& settings, std::int64_t now_us) {
  Findings findings;
  const double clear_min = channels.empty() ? 0 : channel_clear_min;
  findings.judged.push_back(judged(furnace, "stuck reading", now_us, clear_min));
  findings.judged.push_back(judged(furnace, "implausible reading", now_us, clear_min));
  for (const NamedHealth& each : channels) {
    const Health health = each.health.health;
    const bool stuck = health == Health::stuck;
    if (!stuck && health != Health::noisy && health != Health::jumping && health != Health::drifting)
      continue;
    Situation situation;
    situation.condition = of_furnace(furnace, stuck ? "stuck reading" : "implausible reading", each.channel);
    situation.sentence = "Channel " + each.channel + ": " + each.health.sentence;
    situation.advice =
        stuck ? "Check the instrument and the logger; mark the stretch if it was no measurement."
              : "Check the instrument and its wiring; mark the stretch if it was no measurement.";
    situation.at_us = now_us;
    situation.since_us = each.health.since_us;
    // The health of a channel looks back over a stretch of its own; a moment more tells a passing state.
    situation.hold_s = settings.hold_min * 60;
    findings.situations.push_back(std::move(situation));
  }
  return findings;
}

}  // namespace hearthfront::server
