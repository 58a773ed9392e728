// A steel as the solver sees it: its composition in weight percent. Valid for low-alloy case-hardening
// steels (C 0.05-0.35, Mn <= 2, Cr <= 2.5, Ni <= 4, Mo <= 0.6, Si <= 0.6 wt%).
#pragma once

#include <string>

namespace hearthfront::solver {

struct Composition {
  double c_wt_pct = 0, mn_wt_pct = 0, cr_wt_pct = 0, ni_wt_pct = 0, mo_wt_pct = 0, si_wt_pct = 0;
};

struct Steel {
  std::string name;
  Composition composition;
};

}  // namespace hearthfront::solver
