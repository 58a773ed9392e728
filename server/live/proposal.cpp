#include "server/live/proposal.h"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <stdexcept>

namespace hearthfront::server {
namespace {

// What is left of a segment below this is not worth a line on the controller.
constexpr double least_segment_min = 1;

std::string words(const char* format, auto... values) {
  char line[200];
  std::snprintf(line, sizeof line, format, values...);
  return line;
}

// The present plan with what ends each segment replaced by when that is projected to be, and a lone free
// segment parted in two, so that a load can be enriched once more before it ends.
std::vector<Segment> searchable(const OutlookBase& base, const LoadOutlook& present) {
  std::vector<Segment> rest = base.rest;
  double before_s = 0;
  for (std::size_t i = 0; i < rest.size(); ++i) {
    const double end_s = present.ahead.segment_ends_s[i];
    if (rest[i].until) {
      rest[i].duration_min = std::round((end_s - before_s) / 60);
      rest[i].until.reset();
      rest[i].longest_min = 0;
    }
    before_s = end_s;
  }
  return rest;
}

// A segment that lets the load cool before the quench has its length for the temperature: it stays as it is,
// and where it is all that is left it is not shortened.
std::vector<solver::SegmentFreedom> freedom_of(const OutlookBase& base, const std::vector<Segment>& rest) {
  std::vector<solver::SegmentFreedom> freedom;
  const bool heat = base.definition->recipe.temperature_may_change;
  for (std::size_t i = 0; i < rest.size(); ++i) {
    const bool cooling = i == 0 ? base.first_cools : cools(rest[i - 1], rest[i]);
    if (!cooling)
      freedom.push_back({true, true, heat, 0});
    else if (rest.size() == 1)
      freedom.push_back({true, true, false, rest[i].duration_min * 60});
    else
      freedom.push_back({false, false, false, 0});
  }
  return freedom;
}

void part_lone_segment(std::vector<Segment>& rest, std::vector<solver::SegmentFreedom>& freedom) {
  const auto free = [](const solver::SegmentFreedom& each) { return each.duration; };
  if (std::count_if(freedom.begin(), freedom.end(), free) != 1) return;
  const auto at = std::find_if(freedom.begin(), freedom.end(), free) - freedom.begin();
  if (freedom[static_cast<std::size_t>(at)].shortest_s > 0) return;
  Segment second = rest[static_cast<std::size_t>(at)];
  second.ramp_min = 0;
  rest[static_cast<std::size_t>(at)].duration_min = 0;
  rest.insert(rest.begin() + at + 1, second);
  freedom.insert(freedom.begin() + at + 1, freedom[static_cast<std::size_t>(at)]);
}

solver::SearchLimits limits_of(const OutlookBase& base, double asked_chance) {
  const LoadDefinition& load = *base.definition;
  const PathStep& place = load.place_at(base.at_us);
  const Furnace& furnace = *load.furnace(place.outside() ? load.path.front().furnace : place.furnace);
  solver::SearchLimits limits;
  limits.asked_chance = asked_chance;
  limits.highest_temperature_degc = furnace.highest_temperature_degc;
  limits.highest_carbon_potential_wt_pct = furnace.highest_carbon_potential_wt_pct;
  // A gas leaner than the drawing's surface, or than the recipe ever asks, would leave a soft skin.
  double lowest = 2;
  for (const Segment& segment : base.rest) {
    lowest = std::min(lowest, segment.carbon_potential_wt_pct);
    limits.lowest_temperature_degc = std::min(limits.lowest_temperature_degc, segment.temperature_degc);
  }
  for (const Item& item : load.items)
    if (item.surface_carbon_window_wt_pct)
      lowest = std::min(lowest, item.surface_carbon_window_wt_pct->first);
  limits.lowest_carbon_potential_wt_pct = std::floor(lowest * 100) / 100;
  return limits;
}

double confirmed(const OutlookBase& base, const MemberModels& fresh, const MemberStates& states,
                 const std::vector<Segment>& rest) {
  const auto items = outlook_items(*base.definition, fresh, states);
  return solver::end_joint_chance(items, planned(*base.definition, rest), base.furnace, base.now);
}

MemberStates states_after(const OutlookBase& base, const MemberModels& fresh) {
  MemberStates states = start_members(*base.definition, fresh);
  for (std::size_t i = 0; i < states.size(); ++i) {
    solver::GasCarburizing::Workspace workspace(fresh.models[i]);
    for (const solver::IntervalInputs& inputs : base.history)
      fresh.models[i].advance(states[i], inputs, workspace);
  }
  return states;
}

std::vector<Segment> with_plan(std::vector<Segment> rest, const std::vector<solver::PlannedSegment>& plan) {
  for (std::size_t i = 0; i < rest.size(); ++i) {
    rest[i].duration_min = std::round(plan[i].duration_s / 60);
    rest[i].temperature_degc = plan[i].temperature_degc;
    rest[i].carbon_potential_wt_pct = std::round(plan[i].carbon_potential_wt_pct * 100) / 100;
    rest[i].ramp_min = std::min(rest[i].ramp_min, rest[i].duration_min);
  }
  // To end at once is a plan too: its last segment then lasts a minute.
  const Segment last = rest.back();
  std::erase_if(rest, [](const Segment& segment) { return segment.duration_min < least_segment_min; });
  if (rest.empty()) {
    rest.push_back(last);
    rest.back().duration_min = least_segment_min;
  }
  return rest;
}

double end_min(const LoadOutlook& outlook) {
  return outlook.ahead.end.at_s / 60;
}

std::string reason_of(const OutlookBase& base, const solver::FoundPlan& found) {
  const auto& items = base.definition->items;
  const std::string best = words("The best chance is %.0f %%.", 100 * found.joint_chance);
  const std::string name = "Item " + items[found.item].name;
  switch (found.end) {
    case solver::SearchEnd::found:
      break;
    case solver::SearchEnd::window_passed:
      return name + " is already deeper than its window; no schedule takes case depth back.";
    case solver::SearchEnd::conflict:
      return name + " would still be shallow when item " + items[found.other_item].name +
             " is already deep: no schedule suits both. " + best;
    case solver::SearchEnd::too_wide:
      return name + ": its band is too wide for its windows, whatever the schedule. " + best +
             " A measured coupon of this furnace would narrow the band.";
    case solver::SearchEnd::ceiling: {
      const char* by = found.ceiling.by == solver::Ceiling::soot      ? "soot"
                       : found.ceiling.by == solver::Ceiling::carbide ? "the carbide limit"
                                                                      : "the furnace";
      return name + ": the carbon potential is held to " +
             words("%.2f %% C by ", found.ceiling.carbon_potential_wt_pct) + by + ". " + best;
    }
    case solver::SearchEnd::no_control:
      return "Nothing that is left of this recipe may be changed.";
  }
  return "No schedule reaches the asked chance. " + best;
}

std::string joined(const std::vector<std::string>& parts) {
  std::string text;
  for (const std::string& part : parts) text += (text.empty() ? "" : "; ") + part;
  return text;
}

}  // namespace

std::vector<std::string> changes_between(const std::vector<Segment>& present,
                                         const std::vector<Segment>& wanted) {
  std::vector<std::string> changes;
  const auto describe = [](const Segment& segment) {
    return words("%.0f min at %.0f degC and %.2f %% C", segment.duration_min, segment.temperature_degc,
                 segment.carbon_potential_wt_pct);
  };
  if (present.size() != wanted.size()) {
    for (const Segment& segment : wanted) changes.push_back(segment.name + ": " + describe(segment));
    return changes;
  }
  for (std::size_t i = 0; i < present.size(); ++i) {
    const Segment& was = present[i];
    const Segment& is = wanted[i];
    std::vector<std::string> parts;
    const double minutes = is.duration_min - was.duration_min;
    if (std::fabs(minutes) >= 0.5)
      parts.push_back(words("%.0f min %s (%.0f min from now on)", std::fabs(minutes),
                            minutes > 0 ? "longer" : "shorter", is.duration_min));
    if (std::fabs(is.carbon_potential_wt_pct - was.carbon_potential_wt_pct) > 0.004)
      parts.push_back(words("carbon potential %.2f instead of %.2f %% C", is.carbon_potential_wt_pct,
                            was.carbon_potential_wt_pct));
    if (std::fabs(is.temperature_degc - was.temperature_degc) > 0.4)
      parts.push_back(words("%.0f instead of %.0f degC", is.temperature_degc, was.temperature_degc));
    std::string line = joined(parts);
    if (!line.empty()) changes.push_back(is.name + ": " + line);
  }
  return changes;
}

Proposal propose(const OutlookBase& base, const ProposalAsk& ask) {
  Proposal proposal;
  proposal.present = make_outlook(base, base.rest, ask.limits);
  if (!proposal.present) throw std::runtime_error("the present plan cannot be projected: the model failed");
  std::vector<Segment> rest = searchable(base, *proposal.present);
  const std::vector<Segment> unparted = rest;
  auto freedom = freedom_of(base, rest);
  part_lone_segment(rest, freedom);

  const auto fresh = make_members(*base.definition, solver::confirming_members,
                                  member_seed(*base.definition) ^ 0x9e3779b97f4a7c15ULL);
  const MemberStates fresh_states = states_after(base, *fresh);
  const auto items = outlook_items(*base.definition, *base.members, base.states);
  solver::SearchLimits limits = limits_of(base, ask.asked_chance);
  solver::FoundPlan found;
  // Where the members drawn afresh see it less well, the search is asked for that much more.
  constexpr int most_rounds = 5;
  auto plan = planned(*base.definition, rest);
  for (int round = 0; round < most_rounds; ++round) {
    found = solver::find_plan(items, plan, freedom, base.furnace, base.now, limits);
    proposal.rest = with_plan(rest, found.plan);
    proposal.confirmed_joint_chance = confirmed(base, *fresh, fresh_states, proposal.rest);
    proposal.found =
        found.end == solver::SearchEnd::found && proposal.confirmed_joint_chance >= ask.asked_chance;
    if (proposal.found || found.end != solver::SearchEnd::found) break;
    limits.asked_chance = std::min(0.995, limits.asked_chance + ask.asked_chance -
                                              proposal.confirmed_joint_chance + 0.003 * (1 + round));
    limits.nearby = true;
    plan = found.plan;
  }
  proposal.outlook = make_outlook(base, proposal.rest, ask.limits);
  if (!proposal.outlook) throw std::runtime_error("the plan found cannot be projected: the model failed");
  proposal.minutes_more = end_min(*proposal.outlook) - end_min(*proposal.present);
  proposal.changes = changes_between(unparted, proposal.rest);
  if (!proposal.found) {
    if (found.end == solver::SearchEnd::found) found.end = solver::SearchEnd::too_wide;
    found.joint_chance = proposal.confirmed_joint_chance;
    proposal.reason = reason_of(base, found);
  }
  const double before = 100 * proposal.present->ahead.end.joint_chance;
  const std::string cost = std::fabs(proposal.minutes_more) < 0.5
                               ? "ends as planned"
                               : words("ends %.0f min %s", std::fabs(proposal.minutes_more),
                                       proposal.minutes_more > 0 ? "later" : "earlier");
  if (!proposal.changes.empty())
    proposal.sentence = joined(proposal.changes) + ". " +
                        words("Chance %.0f %% -> %.0f %%, ", before, 100 * proposal.confirmed_joint_chance) +
                        cost + ".";
  else if (proposal.found)
    proposal.sentence = words("The present plan already reaches it: chance %.0f %%.", before);
  else
    proposal.sentence = words("The present plan, with a chance of %.0f %%.", before);
  return proposal;
}

}  // namespace hearthfront::server
