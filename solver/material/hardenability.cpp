#include "solver/material/hardenability.h"

#include <algorithm>

namespace hearthfront::solver {
namespace {

double carbon_factor(double carbon) {
  const double c = std::clamp(carbon, 0.0, 0.90);
  if (c <= 0.39) return 0.54 * c;
  if (c <= 0.55) return 0.171 + 0.001 * c + 0.265 * c * c;
  if (c <= 0.65) return 0.115 + 0.268 * c - 0.038 * c * c;
  if (c <= 0.75) return 0.143 + 0.2 * c;
  return 0.062 + 0.409 * c - 0.135 * c * c;
}

double manganese_factor(double manganese) {
  const double mn = std::clamp(manganese, 0.0, 1.95);
  return mn <= 1.20 ? 1.0 + 3.3333 * mn : 5.10 * mn - 1.12;
}

}  // namespace

IdealDiameter ideal_critical_diameter(const Composition& s) {
  const auto within = [](double value, double low, double high) { return value >= low && value <= high; };
  return {carbon_factor(s.c_wt_pct) * manganese_factor(s.mn_wt_pct) * (1.0 + 0.7 * s.si_wt_pct) *
              (1.0 + 0.363 * s.ni_wt_pct) * (1.0 + 2.16 * s.cr_wt_pct) * (1.0 + 3.0 * s.mo_wt_pct),
          within(s.c_wt_pct, 0.10, 0.70) && within(s.mn_wt_pct, 0.50, 1.65) &&
              within(s.si_wt_pct, 0.15, 0.60) && within(s.cr_wt_pct, 0, 1.35) &&
              within(s.ni_wt_pct, 0, 1.50) && within(s.mo_wt_pct, 0, 0.55)};
}

}  // namespace hearthfront::solver
