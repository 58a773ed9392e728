// Rules on one load beside its outlook: its place in the recipe, and what the model says of its own numbers.
#include <algorithm>
#include <cmath>
#include <cstdio>

#include "server/alerts/rule_words.h"

namespace hearthfront::server {
namespace {

// A condition is gone when it is this much inside its limit again; common practice, no source.
constexpr double way_back = 0.7;
// As in live/view.cpp: a part that is still heating is below its furnace's carbide limit for some minutes.
constexpr double passing_min = 15;

// One offset against its tolerance.
void add_offset(Findings& findings, const LoadView& view, const AlertSettings& settings, const char* subject,
                double offset, double tolerance, const std::string& words) {
  Judged judged = judged_load(view, "off recipe", settings.clear_hold_min);
  judged.subject = subject;
  findings.judged.push_back(std::move(judged));
  if (std::abs(offset) <= way_back * tolerance) return;
  Situation situation;
  situation.condition = of_load(view, "off recipe", subject);
  situation.present = std::abs(offset) > tolerance;
  situation.sentence = words;
  situation.advice = "Compare the controller's set point with the recipe; correct one of them.";
  situation.at_us = view.result.state_us;
  situation.hold_s = settings.hold_min * 60;
  findings.situations.push_back(std::move(situation));
}

std::string signed_fixed(double value, int digits) {
  return (value < 0 ? "" : "+") + fixed(value, digits);
}

void judge_segment(Findings& findings, const LoadView& view, const AlertSettings& settings) {
  const Recipe& recipe = view.result.definition->recipe_of(view.segment.plan);
  findings.judged.push_back(judged_load(view, "segment due", 0));
  if (view.segment.index >= recipe.segments.size()) return;
  const Segment& segment = recipe.segments[view.segment.index];
  const bool last = view.segment.index + 1 == recipe.segments.size();
  const double overdue_min =
      last ? std::max(view.segment.long_by_min, -view.minutes_left) : view.segment.long_by_min;
  const bool late = overdue_min > segment.tolerance_min;
  if (!late && view.segment.minutes_left > settings.segment_due_lead_min) return;
  Situation situation;
  situation.condition =
      of_load(view, "segment due", std::to_string(view.segment.index + 1) + " " + segment.name);
  situation.severity = late ? Severity::warning : Severity::note;
  situation.at_us = view.result.state_us;
  const std::string name = "\"" + segment.name + "\"";
  if (late)
    situation.sentence =
        "Segment " + name + " has run " + fixed(overdue_min, 0) + " min longer than planned.";
  else if (overdue_min > 0)
    situation.sentence = "Segment " + name + " is due to end now.";
  else
    situation.sentence = "Segment " + name + " ends in " + fixed(view.segment.minutes_left, 0) + " min.";
  if (last) {
    situation.advice = late ? "End the load here once it is out, or correct its plan."
                            : "Have the quench ready; end the load here once it is out.";
  } else {
    const Segment& next = recipe.segments[view.segment.index + 1];
    situation.advice = "Then \"" + next.name + "\": " + fixed(next.temperature_degc, 0) + " °C, " +
                       fixed(next.carbon_potential_wt_pct, 2) + " % C.";
  }
  findings.situations.push_back(std::move(situation));
}

}  // namespace

std::string fixed(double value, int digits) {
  char text[40];
  std::snprintf(text, sizeof text, "%.*f", digits, value);
  return text;
}

std::string percent(double share) {
  return fixed(100 * share, 0) + " %";
}

Findings judge_recipe(const LoadView& view, const AlertSettings& settings) {
  Findings findings;
  // Assumed from the recipe, so nothing can be held against it.
  if (view.condition == Condition::no_data_yet || view.condition == Condition::ended) return findings;
  judge_segment(findings, view, settings);
  Judged place = judged_load(view, "off recipe", settings.clear_hold_min);
  place.subject = "place";
  findings.judged.push_back(place);
  if (!view.segment.doubt.empty()) {
    Situation situation;
    situation.condition = of_load(view, "off recipe", "place");
    situation.sentence = view.segment.doubt;
    situation.advice =
        "Check which segment the controller runs; correct the load's recipe if it is another one.";
    situation.at_us = view.result.state_us;
    situation.hold_s = settings.hold_min * 60;
    findings.situations.push_back(std::move(situation));
  }
  if (!view.outlook) return findings;
  const double offset_k = view.outlook->offset_k, offset_cp = view.outlook->offset_carbon_potential_wt_pct;
  add_offset(findings, view, settings, "temperature", offset_k, settings.off_temperature_k,
             "The furnace reads " + signed_fixed(offset_k, 0) + " K beside the recipe's temperature.");
  add_offset(
      findings, view, settings, "carbon potential", offset_cp, settings.off_carbon_potential_wt_pct,
      "The furnace reads " + signed_fixed(offset_cp, 2) + " % C beside the recipe's carbon potential.");
  return findings;
}

Findings judge_model(const LoadView& view, const AlertSettings& settings) {
  Findings findings;
  findings.judged.push_back(judged_load(view, "carbide limit", settings.clear_hold_min));
  findings.judged.push_back(judged_load(view, "model out of range", settings.clear_hold_min));
  for (const NoteSpan& note : view.result.notes) {
    if (note.note != solver::note_capped_at_carbide_limit || note.to_us != view.result.state_us) continue;
    if (minutes(note.from_us, note.to_us) < passing_min) continue;
    Situation situation;
    situation.condition = of_load(view, "carbide limit", note.item);
    situation.sentence = note.item + ": the gas has been above the carbide limit of the steel for " +
                         fixed(minutes(note.from_us, note.to_us), 0) + " min.";
    situation.advice = "Lower the carbon potential; check the surface for carbides after the quench.";
    situation.at_us = view.result.state_us;
    situation.since_us = note.from_us;
    findings.situations.push_back(std::move(situation));
  }
  const auto& items = view.result.definition->items;
  for (std::size_t i = 0; i < view.result.items.size() && i < items.size(); ++i) {
    const solver::OutcomeKind outcome = view.result.items[i].outcome;
    const bool failed = outcome == solver::OutcomeKind::failed;
    if (!failed && outcome != solver::OutcomeKind::outside_range) continue;
    Situation situation;
    situation.condition = of_load(view, "model out of range", items[i].name);
    situation.severity = failed ? Severity::urgent : Severity::warning;
    situation.sentence =
        items[i].name + (failed ? ": the model failed; its numbers stopped at the last good moment."
                                : ": the part was outside the range of the diffusivity law; its depth is an "
                                  "extrapolation.");
    situation.advice = "Do not release this item by the prediction; rely on the coupon.";
    situation.at_us = view.result.state_us;
    findings.situations.push_back(std::move(situation));
  }
  return findings;
}

}  // namespace hearthfront::server
