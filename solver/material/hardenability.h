// Ideal critical diameter: the bar that an ideal quench hardens to half martensite at the centre. For the
// core of a part; the case needs other factors (its own carbon, undissolved carbide), which are not given
// here. Source: ASTM A255, multiplying factors for grain size 7, boron-free steel (factors from memory; the
// pieces of the carbon factor join within 0.001; the standard's worked example, 1.72 in, comes out).
#pragma once

#include "solver/material/steel.h"

namespace hearthfront::solver {

struct IdealDiameter {
  double inch = 0;
  // Inside the standard's stated range: C 0.10-0.70, Mn 0.50-1.65, Si 0.15-0.60, Cr to 1.35, Ni to 1.50, Mo
  // to 0.55 wt%. Outside the value is indicative only.
  bool in_stated_range = false;
};

// C to 0.90, Mn to 1.95 wt%; beyond, those ends are used and the result is marked outside.
IdealDiameter ideal_critical_diameter(const Composition& steel);

}  // namespace hearthfront::solver
