#include "solver/material/alloy.h"

#include <algorithm>
#include <cmath>

namespace hearthfront::solver {

double alloy_factor_k(const Composition& s) {
  return std::pow(10.0, 0.055 * s.si_wt_pct - 0.013 * s.mn_wt_pct - 0.040 * s.cr_wt_pct +
                            0.014 * s.ni_wt_pct - 0.013 * s.mo_wt_pct);
}

double diffusivity_factor(const Composition& s) {
  return std::clamp(1.0 - 0.107 * s.cr_wt_pct, 0.75, 1.1);
}

double ae3_degc(const Composition& s, double carbon) {
  return 910.0 - 203.0 * std::sqrt(carbon) + 44.7 * s.si_wt_pct - 15.2 * s.ni_wt_pct + 31.5 * s.mo_wt_pct -
         30.0 * s.mn_wt_pct - 11.0 * s.cr_wt_pct;
}

}  // namespace hearthfront::solver
