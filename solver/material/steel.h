// A steel as the solver sees it: its composition in weight percent. Valid for low-alloy case-hardening
// steels (C 0.05-0.35, Mn <= 2, Cr <= 2.5, Ni <= 4, Mo <= 0.6, Si <= 0.6 wt%).
#pragma once

#include <string>

namespace hearthfront::solver {

struct Composition {
  double c_wt_pct = 0, mn_wt_pct = 0, cr_wt_pct = 0, ni_wt_pct = 0, mo_wt_pct = 0, si_wt_pct = 0;
};

// The alloy elements are within the range above; carbon is not asked for (a case has its own).
constexpr bool in_low_alloy_range(const Composition& s) {
  return s.mn_wt_pct <= 2 && s.cr_wt_pct <= 2.5 && s.ni_wt_pct <= 4 && s.mo_wt_pct <= 0.6 &&
         s.si_wt_pct <= 0.6;
}

struct Steel {
  std::string name;
  Composition composition;
};

}  // namespace hearthfront::solver
