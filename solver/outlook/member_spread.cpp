#include "solver/outlook/member_spread.h"

#include <algorithm>
#include <cmath>

#include "solver/outlook/members.h"

namespace hearthfront::solver {
namespace {

double surface_of(const OutlookItem& item, std::size_t lane) {
  return surface_state(item.state->field, lane, item.state->conditions[lane]).carbon_wt_pct;
}

double outside(double value, const Window& window) {
  const double width = window.second - window.first;
  return std::max({0.0, window.first - value, value - window.second}) / width;
}

}  // namespace

MemberSpread::MemberSpread(const std::vector<OutlookItem>& items) {
  for (const OutlookItem& item : items) {
    Item each;
    const std::size_t members = item.model->lanes() - 1;
    each.nominal_depth_m = case_depth_of_lane_m(item, 0);
    const double nominal_surface = surface_of(item, 0);
    for (std::size_t m = 1; m <= members; ++m) {
      const double depth = case_depth_of_lane_m(item, m);
      // While hardly any case is there, a ratio means nothing.
      const bool case_is_there = each.nominal_depth_m > 0.2 * item.case_depth_window_m.first;
      each.depth_ratio.push_back(case_is_there ? depth / each.nominal_depth_m : 1.0);
      each.depth_beyond_m.push_back(case_is_there ? 0.0 : depth - each.nominal_depth_m);
      each.surface_beyond_wt_pct.push_back(surface_of(item, m) - nominal_surface);
    }
    items_.push_back(std::move(each));
  }
  joint_.resize(items_.front().depth_ratio.size());
  depths_.resize(joint_.size());
  surfaces_.resize(joint_.size());
}

MemberSpread::Chance MemberSpread::chance(const std::vector<OutlookItem>& nominal) const {
  Chance chance;
  std::fill(joint_.begin(), joint_.end(), 1.0);
  for (std::size_t i = 0; i < nominal.size(); ++i) {
    const OutlookItem& item = nominal[i];
    const double depth = case_depth_of_lane_m(item, 0);
    chance.distance += outside(depth, item.case_depth_window_m);
    for (std::size_t m = 0; m < joint_.size(); ++m)
      depths_[m] = std::max(0.0, depth * items_[i].depth_ratio[m] + items_[i].depth_beyond_m[m]);
    const SmoothedMembers smoothed(depths_);
    for (std::size_t m = 0; m < joint_.size(); ++m)
      joint_[m] *= smoothed.inside(m, item.case_depth_window_m.first, item.case_depth_window_m.second);
    if (!item.surface_carbon_window_wt_pct) continue;
    const Window& window = *item.surface_carbon_window_wt_pct;
    const double surface = surface_of(item, 0);
    chance.distance += outside(surface, window);
    for (std::size_t m = 0; m < joint_.size(); ++m)
      surfaces_[m] = surface + items_[i].surface_beyond_wt_pct[m];
    const SmoothedMembers surfaces(surfaces_);
    for (std::size_t m = 0; m < joint_.size(); ++m)
      joint_[m] *= surfaces.inside(m, window.first, window.second);
  }
  for (const double member : joint_) chance.joint += member / static_cast<double>(joint_.size());
  return chance;
}

}  // namespace hearthfront::solver
