#include "solver/section/hardness_profile.h"

#include <algorithm>

#include "solver/material/martensite.h"
#include "solver/section/cubic.h"

namespace hearthfront::solver {

std::vector<double> hardness_profile_hv(const Profile& profile, const Composition& steel,
                                        const HardnessTreatment& treatment) {
  std::vector<double> hv;
  hv.reserve(profile.carbon_wt_pct.size());
  for (double carbon : profile.carbon_wt_pct) hv.push_back(case_hardness_hv(carbon, steel, treatment));
  return hv;
}

std::vector<double> retained_austenite_profile(const Profile& profile, const Composition& steel,
                                               double quench_degc) {
  std::vector<double> fraction;
  fraction.reserve(profile.carbon_wt_pct.size());
  for (double carbon : profile.carbon_wt_pct)
    fraction.push_back(retained_austenite_fraction(steel, carbon, quench_degc));
  return fraction;
}

double hardness_at_depth_hv(const Profile& profile, double depth_m, const Composition& steel,
                            const HardnessTreatment& treatment) {
  return case_hardness_hv(carbon_at_depth_wt_pct(profile, depth_m), steel, treatment);
}

std::optional<double> depth_at_hardness_m(const Profile& profile, double limit_hv, const Composition& steel,
                                          const HardnessTreatment& treatment) {
  const auto& x = profile.depth_m;
  const auto reaches = [&](double carbon) { return case_hardness_hv(carbon, steel, treatment) >= limit_hv; };
  if (reaches(profile.carbon_wt_pct.back())) return std::nullopt;
  std::size_t i = x.size() - 1;
  while (i > 0 && !reaches(profile.carbon_wt_pct[i - 1])) --i;
  if (i == 0) return 0.0;
  // Hardness bends where its tables do; carbon is smooth, so the crossing is sought along carbon.
  const std::size_t first = cubic_first(i, x.size());
  return root_between(&x[first], &profile.carbon_wt_pct[first], x[i - 1], x[i], reaches);
}

double finished_case_depth_m(double case_depth_m, double grinding_stock_m) {
  return std::max(0.0, case_depth_m - grinding_stock_m);
}

}  // namespace hearthfront::solver
