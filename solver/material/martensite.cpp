#include "solver/material/martensite.h"

#include <algorithm>
#include <cmath>

namespace hearthfront::solver {

double martensite_start_degc(const Composition& s, double carbon) {
  return 565.0 - 600.0 * (1.0 - std::exp(-0.96 * carbon)) - 31.0 * s.mn_wt_pct - 13.0 * s.si_wt_pct -
         10.0 * s.cr_wt_pct - 18.0 * s.ni_wt_pct - 12.0 * s.mo_wt_pct;
}

double retained_austenite_fraction(const Composition& s, double carbon, double quench_degc) {
  constexpr double rate_per_k = 0.011;
  return std::exp(-rate_per_k * std::max(0.0, martensite_start_degc(s, carbon) - quench_degc));
}

}  // namespace hearthfront::solver
