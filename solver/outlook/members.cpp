#include "solver/outlook/members.h"

#include <algorithm>
#include <array>
#include <cmath>

#include "solver/section/cubic.h"

namespace hearthfront::solver {

double depth_at_carbon_of_lane_m(const CarbonField& field, std::size_t lane, double limit) {
  const std::vector<double>& x = field.mesh->depth_m;
  const std::size_t n = x.size();
  if (field.carbon_wt_pct(lane, n - 1) >= limit) return field.mesh->section.extent_m;
  std::size_t i = n - 1;
  while (i > 0 && field.carbon_wt_pct(lane, i - 1) < limit) --i;
  if (i == 0) return 0.0;
  const std::size_t first = cubic_first(i, n);
  std::array<double, 4> c;
  for (std::size_t k = 0; k < 4; ++k) c[k] = field.carbon_wt_pct(lane, first + k) - limit;
  // Regula falsi, the Illinois way: the bracket never opens, and a smooth cubic takes few turns.
  double low = x[i - 1], high = x[i];
  double at_low = c[i - 1 - first], at_high = c[i - first];
  for (int turn = 0; turn < 30 && high - low > 1e-11; ++turn) {
    const double middle = high - at_high * (high - low) / (at_high - at_low);
    const double value = cubic_at(&x[first], c.data(), middle);
    if (std::fabs(value) < 1e-9) return middle;
    if (value >= 0) {
      low = middle;
      at_low = value;
      at_high *= 0.5;
    } else {
      high = middle;
      at_high = value;
      at_low *= 0.5;
    }
  }
  return 0.5 * (low + high);
}

double case_depth_of_lane_m(const OutlookItem& item, std::size_t lane) {
  const double limit = item.criterion_wt_pct + (*item.criterion_offset_wt_pct)[lane];
  return std::max(0.0, depth_at_carbon_of_lane_m(item.state->field, lane, limit) - item.grinding_stock_m);
}

void read_members(const OutlookItem& item, std::vector<double>& case_depths_m,
                  std::vector<double>& surface_carbon_wt_pct) {
  for (std::size_t m = 0; m < case_depths_m.size(); ++m) {
    case_depths_m[m] = case_depth_of_lane_m(item, m + 1);
    surface_carbon_wt_pct[m] =
        surface_state(item.state->field, m + 1, item.state->conditions[m + 1]).carbon_wt_pct;
  }
}

double nominal_gradient_wt_pct_per_m(const CarbonField& field, double depth_m) {
  const std::vector<double>& x = field.mesh->depth_m;
  const auto above = std::upper_bound(x.begin(), x.end(), depth_m);
  const std::size_t i = std::clamp<std::size_t>(static_cast<std::size_t>(above - x.begin()), 1, x.size() - 1);
  return std::max(0.0, (field.carbon_wt_pct(0, i - 1) - field.carbon_wt_pct(0, i)) / (x[i] - x[i - 1]));
}

}  // namespace hearthfront::solver
