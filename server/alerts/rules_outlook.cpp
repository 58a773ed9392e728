// The rule on the outlook: a miss that can still be saved, said once.
//
// An item misses where the median of its finished case depth or surface carbon at the end of the plan lies
// outside its window. The load as a whole misses where its joint chance has fallen well below what its recipe
// offered at the start: a recipe that never had a good chance does not alarm for that all its life.
#include <algorithm>
#include <cstdio>

#include "server/alerts/rule_words.h"

namespace hearthfront::server {
namespace {

constexpr const char* kind = "projected miss";
constexpr double inner_margin = 0.05;   // of the window's width: the median must be that far inside again
constexpr double last_chance_min = 60;  // less than this to the end: urgent
constexpr double micrometre_mm = 1e-3;

struct Reach {
  bool outside = false, well_inside = true;
  double beyond = 0;  // negative: below the window
};

Reach reach(double median, const Window& window) {
  const double margin = inner_margin * (window.second - window.first);
  Reach reach;
  reach.beyond =
      median < window.first ? median - window.first : (median > window.second ? median - window.second : 0.0);
  reach.outside = reach.beyond != 0;
  reach.well_inside = median >= window.first + margin && median <= window.second - margin;
  return reach;
}

std::string window_text(const Window& window, int digits) {
  return fixed(window.first, digits) + " to " + fixed(window.second, digits);
}

Situation item_situation(const LoadView& view, std::size_t i, double minutes_left) {
  const Item& item = view.result.definition->items[i];
  const solver::ItemOutlook& end = view.outlook->ahead.end.items[i];
  const double depth_mm = end.case_depth_m.median * 1e3;
  const Reach depth = reach(depth_mm, item.case_depth_window_mm);
  Reach carbon;
  if (item.surface_carbon_window_wt_pct)
    carbon = reach(end.surface_carbon_wt_pct.median, *item.surface_carbon_window_wt_pct);

  Situation situation;
  situation.condition = of_load(view, kind, item.name);
  situation.at_us = view.result.state_us;
  situation.present = depth.outside || carbon.outside;
  if (!situation.present && depth.well_inside && carbon.well_inside) {
    situation.condition.kind.clear();  // surely gone: nothing to report
    return situation;
  }
  std::string what;
  if (depth.outside || !carbon.outside)
    what = "case depth " + fixed(depth_mm, 2) + " mm at the end, window " +
           window_text(item.case_depth_window_mm, 2) + " mm";
  else
    what = "surface carbon " + fixed(end.surface_carbon_wt_pct.median, 2) + " % at the end, window " +
           window_text(*item.surface_carbon_window_wt_pct, 2) + " %";
  situation.sentence = item.name + ": " + what + "; chance of all windows " + percent(end.joint_chance) + ".";

  // Carbon that is in the part does not come out again by holding longer.
  const auto& now_items = view.outlook->now.items;
  const bool too_deep_now = i < now_items.size() && now_items[i].case_depth_m.median * 1e3 >
                                                        item.case_depth_window_mm.second + micrometre_mm;
  situation.severity = too_deep_now || minutes_left < last_chance_min ? Severity::urgent : Severity::warning;
  if (too_deep_now)
    situation.advice = "The case is deeper than the window already: end the cycle and tell the supervisor.";
  else if (depth.beyond < 0)
    situation.advice = "Try holding longer or a higher carbon potential on the load's page.";
  else if (depth.beyond > 0)
    situation.advice = "Try ending earlier or a lower carbon potential on the load's page.";
  else if (carbon.beyond < 0)
    situation.advice = "Try a higher carbon potential in the last segment on the load's page.";
  else
    situation.advice = "Try a longer diffuse segment or a lower carbon potential on the load's page.";
  return situation;
}

}  // namespace

Findings judge_outlook(const LoadView& view, const AlertSettings& settings,
                       const solver::StandingLimits& limits) {
  Findings findings;
  if (!view.outlook || view.outlook->ahead.failed) return findings;
  const LoadOutlook& outlook = *view.outlook;
  const std::size_t count = std::min(outlook.ahead.end.items.size(), view.result.definition->items.size());
  findings.judged.push_back(judged_load(view, kind, settings.clear_hold_min));
  const double left = minutes(outlook.at_us, outlook.ends_us);
  bool item_misses = false;
  for (std::size_t i = 0; i < count; ++i) {
    Situation situation = item_situation(view, i, left);
    if (situation.condition.kind.empty()) continue;
    situation.hold_s = settings.hold_min * 60;
    item_misses = item_misses || situation.present;
    findings.situations.push_back(std::move(situation));
  }

  const double chance = outlook.ahead.end.joint_chance;
  const double fallen = outlook.offered_joint_chance - chance;
  if (fallen <= settings.chance_drop / 2) return findings;
  Situation whole;
  whole.condition = of_load(view, kind, "");
  whole.at_us = view.result.state_us;
  // Where an item misses its window, that says more than the chance of all: one alert is enough.
  whole.present = fallen > settings.chance_drop && chance < limits.inside_from && !item_misses;
  whole.severity = left < last_chance_min ? Severity::urgent : Severity::warning;
  whole.sentence = "The chance that all items end inside their windows has fallen to " + percent(chance) +
                   " from " + percent(outlook.offered_joint_chance) + " at the start.";
  whole.advice = "Look for a better rest of the recipe on the load's page.";
  whole.hold_s = settings.hold_min * 60;
  findings.situations.push_back(std::move(whole));
  return findings;
}

}  // namespace hearthfront::server
