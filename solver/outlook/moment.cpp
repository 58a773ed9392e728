// What members look like at one moment: bands, chances, standing.
#include <algorithm>
#include <cmath>

#include "solver/outlook/members.h"
#include "solver/outlook/outlook.h"

namespace hearthfront::solver {
namespace {

WindowChance chances(const SmoothedMembers& members, const Window& window) {
  WindowChance chance;
  chance.below = members.chance_below(window.first);
  chance.above = 1 - members.chance_below(window.second);
  chance.inside = std::max(0.0, 1 - chance.below - chance.above);
  return chance;
}

Standing standing_of(const WindowChance& chance, const StandingLimits& limits) {
  if (chance.inside >= limits.inside_from) return Standing::inside;
  if (chance.below >= limits.missed_from) return Standing::shallow;
  if (chance.above >= limits.missed_from) return Standing::deep;
  return Standing::undecided;
}

// Multiplies each member's share of the window into `joint`.
void join(const SmoothedMembers& members, const Window& window, std::vector<double>& joint) {
  for (std::size_t m = 0; m < joint.size(); ++m) joint[m] *= members.inside(m, window.first, window.second);
}

double mean(const std::vector<double>& values) {
  double sum = 0;
  for (const double value : values) sum += value;
  return sum / static_cast<double>(values.size());
}

// One sigma of what a lab's figure adds to the true depth.
double lab_sd_m(const OutlookItem& item, double depth_m) {
  const double gradient = nominal_gradient_wt_pct_per_m(item.state->field, depth_m);
  const double by_carbon = gradient > 0 ? item.lab_carbon_sd_wt_pct / gradient : 0;
  return std::hypot(by_carbon, item.lab_position_sd_m);
}

}  // namespace

const char* text(Standing standing) {
  switch (standing) {
    case Standing::inside:
      return "inside";
    case Standing::shallow:
      return "shallow";
    case Standing::deep:
      return "deep";
    case Standing::undecided:
      return "undecided";
  }
  return "";
}

OutlookMoment read_moment(const std::vector<OutlookItem>& items, const StandingLimits& limits) {
  OutlookMoment moment;
  const std::size_t members = items.front().model->lanes() - 1;
  std::vector<double> joint(members, 1.0), own, depths(members), surfaces(members), sorted;
  for (const OutlookItem& item : items) {
    ItemOutlook out;
    read_members(item, depths, surfaces);
    out.nominal_case_depth_m = case_depth_of_lane_m(item, 0);
    const SmoothedMembers depth(depths);
    out.case_depth = chances(depth, item.case_depth_window_m);
    out.lab_case_depth =
        chances(SmoothedMembers(depths, lab_sd_m(item, out.nominal_case_depth_m + item.grinding_stock_m)),
                item.case_depth_window_m);
    own.assign(members, 1.0);
    join(depth, item.case_depth_window_m, own);
    out.surface_carbon = {0, 1, 0};
    if (item.surface_carbon_window_wt_pct) {
      const SmoothedMembers surface(surfaces);
      out.surface_carbon = chances(surface, *item.surface_carbon_window_wt_pct);
      join(surface, *item.surface_carbon_window_wt_pct, own);
    }
    out.joint_chance = mean(own);
    for (std::size_t m = 0; m < members; ++m) joint[m] *= own[m];
    out.standing = standing_of(out.case_depth, limits);
    out.case_depth_m = band_of(sorted = depths);
    out.surface_carbon_wt_pct = band_of(sorted = surfaces);
    moment.items.push_back(out);
  }
  moment.joint_chance = mean(joint);
  const auto least = std::min_element(
      moment.items.begin(), moment.items.end(),
      [](const ItemOutlook& a, const ItemOutlook& b) { return a.joint_chance < b.joint_chance; });
  moment.controlling_item = static_cast<std::size_t>(least - moment.items.begin());
  return moment;
}

std::vector<Band> case_depth_bands_m(const std::vector<OutlookItem>& items) {
  std::vector<Band> bands;
  std::vector<double> depths(items.front().model->lanes() - 1);
  for (const OutlookItem& item : items) {
    for (std::size_t m = 0; m < depths.size(); ++m) depths[m] = case_depth_of_lane_m(item, m + 1);
    bands.push_back(band_of(depths));
  }
  return bands;
}

double joint_chance_of(const std::vector<OutlookItem>& items) {
  const std::size_t members = items.front().model->lanes() - 1;
  std::vector<double> joint(members, 1.0), depths(members), surfaces(members);
  for (const OutlookItem& item : items) {
    read_members(item, depths, surfaces);
    join(SmoothedMembers(depths), item.case_depth_window_m, joint);
    if (item.surface_carbon_window_wt_pct)
      join(SmoothedMembers(surfaces), *item.surface_carbon_window_wt_pct, joint);
  }
  return mean(joint);
}

}  // namespace hearthfront::solver
